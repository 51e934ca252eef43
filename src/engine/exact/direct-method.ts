/**
 * The specification of the direct method, which the reference, the scalar kernel and the SIMD kernel obey bit for bit.
 *
 * Source: Gillespie, "A general method for numerically simulating the stochastic time evolution of coupled chemical
 * reactions" (J. Comput. Phys. 1976). All arithmetic is IEEE 754 double precision, rounded to nearest, never fused.
 *
 * 1. Start. Time 0, the initial state after the changes at time 0 (changes.ts), the generator of the replicate (random/stream-key.ts).
 * 2. Triggered changes, until none is due; then first passages are noted: the state is looked at once all changes of its moment
 *    are made. Propensities. Assigned parameters in their order, then a_k for each reaction k in order. Mass action: the constant, already
 *    divided by the product of the factorials of its reactant numbers (up to 10!), times x, x − 1, … for each reactant in order,
 *    from the left; above order 10 each factor is divided by its own number instead. Expression: as written, 0 where a reactant
 *    is missing. Constant subexpressions are worked out once.
 * 3. Sums. p_0 = a_0, p_k = p_{k−1} + a_k; the total is the last. The first a_k that is negative, NaN or infinite fails the
 *    replicate, and so does a total above 1e300.
 * 4. Draws, always both and in this order, each from the upper 52 bits of one output, u = bits · 2⁻⁵²:
 *    waiting time −ln(1 − u) / total, with the logarithm of kernel/elementary/logarithm.ts; choice u · total.
 * 5. Time. t' = t − ln(1 − u) / total; infinity where the total is 0. The state is written at grid time 0 before the first
 *    firing, and at every other grid time g < t' that is not yet written; grid time i is (i · horizon) / n. After the last grid
 *    time the replicate ends.
 *    Where a timed change lies before t' and not after the next grid time, nothing fires: time moves to the change, all changes
 *    of that moment are made in document order, and the replicate goes on from 2 with new draws. That is exact, since waiting
 *    times have no memory. A state at a grid time is thus the one after every firing and change up to and at it.
 * 6. A replicate that has fired as often as its event limit allows fails here.
 * 7. Choice. The first k with p_k > u · total. Its changes are applied; a count above 2^31 − 1 fails the replicate. Time becomes
 *    t', and so on from 2.
 *
 * A total so small that it is subnormal counts like 0: its waiting time lies beyond every horizon allowed (1e250).
 */

/** Horizons reach from the least to the largest, so that a subnormal total never fires. */
export const largestHorizon = 1e250;

/** Grid time i is (i · horizon) / gridIntervals, i = 0 … gridIntervals, in the network's unit of time. */
export const gridTimes = (horizon: number, gridIntervals: number): Float64Array =>
  Float64Array.from({ length: gridIntervals + 1 }, (_, i) => (i * horizon) / gridIntervals);
