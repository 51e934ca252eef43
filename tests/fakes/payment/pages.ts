/** The hosted page where a buyer pays, and the control page. Plain, and they say that no money moves. */
import { heldBy } from './balance.ts';
import { sampleCards } from './cards.ts';
import type { FakeSession, Line, State } from './state.ts';

const escape = (text: string): string => text.replaceAll(/[&<>"']/g, (character) => `&#${character.charCodeAt(0)};`);

const style = `
  :root { color-scheme: light dark; --paper: #f2f6f8; --panel: #fcfdfe; --rule: #cbd7de; --ink: #13212b; --soft: #4b5c69; --phenol: #b8105a; --on: #fff; --congo: #9c1b1f; }
  @media (prefers-color-scheme: dark) { :root { --paper: #0d1418; --panel: #131d23; --rule: #2a3943; --ink: #e8f0f3; --soft: #9fb1bc; --phenol: #ff6fa8; --on: #0d1418; --congo: #ff8a84; } }
  body { margin: 0; background: var(--paper); color: var(--ink); font: 16px/1.5 system-ui, sans-serif; }
  main { max-width: 34rem; margin: 0 auto; padding: 1.5rem 1rem 4rem; }
  .note { border-left: 4px solid var(--phenol); padding: .25rem .75rem; margin: 0 0 1.5rem; }
  .problem { border-left: 4px solid var(--congo); color: var(--congo); padding: .25rem .75rem; }
  h1 { font-size: 1.4rem; } h2 { font-size: 1.1rem; margin-top: 2rem; }
  table { width: 100%; border-collapse: collapse; font-variant-numeric: tabular-nums; } td, th { border-top: 1px solid var(--rule); padding: .4rem 0; text-align: left; } td:last-child, th:last-child { text-align: right; }
  label { display: block; font-weight: 600; } input[type=text] { font: inherit; width: 100%; box-sizing: border-box; padding: .5rem; border: 1px solid var(--soft); border-radius: 4px; background: var(--panel); color: inherit; }
  button { font: inherit; font-weight: 600; padding: .55rem 1rem; margin: .6rem .4rem 0 0; border: 1px solid var(--phenol); border-radius: 4px; background: var(--panel); color: var(--phenol); cursor: pointer; } button.first { background: var(--phenol); color: var(--on); }
  a { color: inherit; } :focus-visible { outline: 3px solid var(--phenol); outline-offset: 2px; } code { white-space: nowrap; } .soft { color: var(--soft); }`;

const page = (title: string, body: string): string => `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escape(title)} – practice payments</title><style>${style}</style></head><body><main>
<p class="note"><strong>Practice payments.</strong> This page belongs to the local stand-in for the payment service. No money moves, and no real card should be typed here.</p>
${body}</main></body></html>`;

const money = (minor: number, currency: string): string =>
  new Intl.NumberFormat('en', { style: 'currency', currency: currency.toUpperCase() }).format(minor / 100);

export function payPage(session: FakeSession, lines: Line[], problem: string | null): string {
  const currency = session.currency ?? 'eur';
  const rows = lines.map(
    ({ name, quantity, unitAmount }) =>
      `<tr><td>${escape(name)}${quantity === 1 ? '' : ` × ${quantity}`}</td><td>${money(quantity * unitAmount, currency)}</td></tr>`,
  );
  const total = session.mode === 'payment' ? money(session.amount_total ?? 0, currency) : '';
  const doing = session.mode === 'payment' ? `Pay ${total}` : 'Save this card';
  const cards = sampleCards.map(
    ({ number, says }) => `<tr><td><code>${number}</code></td><td>${escape(says)}</td></tr>`,
  );
  const debit =
    session.mode === 'payment'
      ? `<h2>Or by bank debit</h2><p class="soft">The payment is on its way for three days, then arrives or comes back.</p>
    <form method="post"><input type="hidden" name="way" value="debit"><button name="succeeds" value="1">Debit that will arrive</button><button name="succeeds" value="0">Debit that will come back</button></form>`
      : '';
  return page(
    doing,
    `<h1>${escape(doing)}</h1>
    ${rows.length ? `<table>${rows.join('')}<tr><th scope="row">Total</th><td>${total}</td></tr></table>` : ''}
    ${problem ? `<p class="problem" role="alert">${escape(problem)}</p>` : ''}
    <h2>By card</h2>
    <form method="post"><input type="hidden" name="way" value="card"><label for="card">Card number</label>
    <input id="card" name="card" type="text" inputmode="numeric" autocomplete="off" required value="4242 4242 4242 4242">
    <button class="first">${escape(doing)}</button></form>
    <table><thead><tr><th>Sample card</th><th>What it does</th></tr></thead>${cards.join('')}</table>
    ${debit}
    <p>${session.cancel_url ? `<a href="${escape(session.cancel_url)}">Go back without paying</a>` : ''}</p>`,
  );
}

export const authenticatePage = (session: FakeSession): string =>
  page(
    session.mode === 'setup' ? 'Confirm the card' : 'Confirm the payment',
    `<h1>Your bank asks whether this is you</h1>
    <form method="post" action="/pay/${session.id}/authenticate"><button class="first" name="passed" value="1">Confirm the ${session.mode === 'setup' ? 'card' : 'payment'}</button><button name="passed" value="0">Do not confirm</button></form>`,
  );

export const closedPage = (session: FakeSession): string =>
  page(
    'Nothing to pay',
    `<h1>${session.status !== 'complete' ? 'This checkout has expired' : session.mode === 'setup' ? 'This card has been saved' : 'This has been paid'}</h1>
    <p>${session.status === 'complete' ? 'There is nothing left to do here.' : 'Go back and begin again; nothing was charged.'}</p>`,
  );

export const notFoundPage = (): string => page('Not found', '<h1>There is no such page here</h1>');

const button = (action: string, says: string, fields: Record<string, string | number> = {}): string =>
  `<form method="post" action="/_fake/${action}">${Object.entries(fields)
    .map(([name, value]) => `<input type="hidden" name="${name}" value="${escape(String(value))}">`)
    .join('')}<button>${escape(says)}</button></form>`;

export function controlPage(state: State): string {
  const paid = Object.values(state.intents).filter(({ status }) => status === 'succeeded');
  const disputed = Object.values(state.disputes).filter(({ status }) => status === 'needs_response');
  const events = [...state.events].reverse().slice(0, 30);
  return page(
    'Controls',
    `<h1>Controls of the practice payments</h1>
    <h2>Clock</h2><p>${state.clockOffsetSeconds} s ahead; ${Object.keys(state.debits).length} debits on their way.</p>
    ${button('clock', 'Let a day pass', { advanceSeconds: 86_400 })}${button('clock', 'Let four days pass', { advanceSeconds: 345_600 })}
    <h2>Webhooks</h2><p><code>${escape(JSON.stringify(state.switches))}</code>; ${state.deliveries.length} waiting.</p>
    ${button('switches', 'Deliver the next ones twice', { duplicate: 1 })}${button('switches', 'Lose the next one', { lose: 1 })}${button('switches', 'Reverse their order', { reorder: 1 })}${button('switches', 'Deliver a minute late', { delayMs: 60_000 })}${button('switches', 'Behave well again')}
    <h2>Calls</h2>${button('switches', 'Fail the next two', { failNext: 2 })}${button('switches', 'Lose the next two answers', { hangNext: 2 })}${button('switches', 'Keep the next one waiting', { stallNext: 1 })}
    <h2>Balance</h2><p>${
      heldBy(state)
        .map(({ currency, amount }) => money(amount, currency))
        .join(', ') || 'Nothing is held.'
    }</p>
    <h2>Payments</h2>${paid.map(({ id, amount, currency }) => `<p>${money(amount, currency)} <code>${id}</code></p>${button('disputes', 'Dispute it', { paymentIntent: id })}`).join('') || '<p>None yet.</p>'}
    ${disputed.map(({ id }) => `<p>Dispute <code>${id}</code></p>${button('disputes/decide', 'Decide for the seller', { dispute: id, status: 'won' })}${button('disputes/decide', 'Decide for the buyer', { dispute: id, status: 'lost' })}`).join('')}
    <h2>Events</h2><table>${events.map(({ id, type }) => `<tr><td>${escape(type)}</td><td><code>${id}</code></td></tr>`).join('')}</table>`,
  );
}
