import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import { meanField } from '@/engine/meanfield/mean-field.ts';
const R=(d:any)=>{const o=resolveNetwork(d); if(!o.ok) throw new Error(JSON.stringify(o.problems)); return o.network;};
const ma=(c:any)=>({kind:'massAction' as const,constant:String(c)});
const rob=R({species:[{id:'A',initialCount:1},{id:'B',initialCount:0},{id:'C',initialCount:0}],reactions:[
 {id:'r1',equation:'A -> B',rateLaw:ma(0.04)},{id:'r2',equation:'2 B -> B + C',rateLaw:ma(6e7)},{id:'r3',equation:'B + C -> A + C',rateLaw:ma(1e4)}]});
for (const [T,ref] of [[0.4,[9.8517211386099e-01,3.3863953789749e-05,1.4794022185220e-02]],[40,[7.1582706871941e-01,9.1855347645577e-06,2.8416374574583e-01]],[1e11,[0.2083340149701255e-07,0.8333360770334713e-13,0.9999999791665050]]] as any)
 for (const tol of [1e-4,1e-6,1e-8,1e-10]) { const t0=performance.now(); const s=meanField({network:rob,horizon:T,gridIntervals:1,relativeTolerance:tol,absoluteTolerance:tol*1e-8});
  if(!s.ok){console.log(s);continue;}
  const y=s.observables.map(o=>o.values[1]!);
  console.log(T,tol,s.steps,y.map((v,i)=>((v/ref[i]-1).toExponential(2))).join(' '),'sum-1',(y[0]!+y[1]!+y[2]!-1).toExponential(1),(performance.now()-t0).toFixed(1)+'ms'); }
const dd=R({species:[{id:'S1',initialCount:4150},{id:'S2',initialCount:39565},{id:'S3',initialCount:3445}],reactions:[{id:'a',equation:'S1 -> 0',rateLaw:ma(1)},{id:'b',equation:'2 S1 -> S2',rateLaw:ma(0.002)},{id:'c',equation:'S2 -> 2 S1',rateLaw:ma(0.5)},{id:'d',equation:'S2 -> S3',rateLaw:ma(0.04)}]});
const s=meanField({network:dd,horizon:10,gridIntervals:100}); if(s.ok) console.log(s.steps,s.observables.map(o=>o.values[100]));
// chain of n
for (const n of [100,1000,5000]) { const sp=Array.from({length:n},(_,i)=>({id:'X'+i,initialCount:i?0:1000}));
 const net=R({species:sp,reactions:sp.slice(1).flatMap((_,i)=>[{id:'f'+i,equation:`X${i} -> X${i+1}`,rateLaw:ma(10)},{id:'b'+i,equation:`X${i+1} -> X${i}`,rateLaw:ma(1)}])});
 const t0=performance.now(); const s=meanField({network:net,horizon:10,gridIntervals:10}); console.log('chain',n,s.ok?s.method+' '+s.steps+' '+s.observables.reduce((a,o)=>a+o.values[10]!,0):s,(performance.now()-t0).toFixed(0)+'ms'); }
// dense random
for (const n of [50,150,300,600,1000]) { let z=12345; const rnd=()=>{z=(z*1103515245+12345)%2147483648;return z/2147483648;};
 const sp=Array.from({length:n},(_,i)=>({id:'X'+i,initialCount:100}));
 const rs=Array.from({length:10*n},(_,i)=>{const p=()=>'X'+Math.floor(rnd()*n); const [a,b,c,d]=[p(),p(),p(),p()]; return {id:'r'+i,equation:`${a} + ${b} -> ${c} + ${d}`,rateLaw:ma((rnd()*0.01*(i%100?1:1e4)).toFixed(8))};});
 const net=R({species:sp,reactions:rs}); const t0=performance.now(); const s=meanField({network:net,horizon:10,gridIntervals:10}); console.log('dense',n,s.ok?s.method+' '+s.steps+' '+s.observables.reduce((a,o)=>a+o.values[10]!,0):s.reason+s.message,(performance.now()-t0).toFixed(0)+'ms'); }
// queue
const q=R({species:[{id:'Q',initialCount:20}],reactions:[{id:'in',equation:'0 -> Q',rateLaw:{kind:'expression',expression:'2'}},{id:'out',equation:'Q -> 0',rateLaw:{kind:'expression',expression:'3'}}]});
const qs=meanField({network:q,horizon:50,gridIntervals:10}); console.log(qs.ok?[qs.steps,qs.observables[0]!.values]:qs);
const blow=R({species:[{id:'Q',initialCount:20}],reactions:[{id:'in',equation:'2 Q -> 3 Q',rateLaw:ma(1)}]});
console.log(meanField({network:blow,horizon:50,gridIntervals:10}));
const grow=R({species:[{id:'Q',initialCount:20}],reactions:[{id:'in',equation:'Q -> 2 Q',rateLaw:ma(1)}]});
const gs=meanField({network:grow,horizon:1000,gridIntervals:10}); console.log(gs.ok?gs.steps:gs);
