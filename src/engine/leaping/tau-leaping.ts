/**
 * The specification of tau-leaping, the approximate method, which the reference (reference-leap.ts) and the generated kernel
 * (kernel/tau-leaping.ts) obey bit for bit.
 *
 * Source: Cao, Gillespie & Petzold, "Efficient step size selection for the tau-leaping simulation method" (J. Chem. Phys. 124,
 * 044109, 2006; citation from memory). What is not said here is as in exact/direct-method.ts: start, propensities, their sums,
 * timed changes, uniforms of 52 bits, the order of species and reactions. There are no triggered changes: a leap would pass the
 * moment at which a condition becomes true, so networks that have them are refused.
 *
 * 1. Propensities a_j and their total a0. Where they are bad after a leap, the leap is rejected (7); anywhere else the replicate
 *    fails. Only exact firings, the start and timed changes can thus find a model at fault.
 * 2. First passages are noted at the present time: within a leap nothing is looked at, so one is resolved to the leap's end.
 * 3. What is due at the present time, unless exact steps are left: the timed changes of this moment (then 1 again), or the state at
 *    a grid time, which is then written. After the last grid time the replicate ends.
 * 4. Length of the next leap: critical-reactions.ts says which reactions may not leap, step-selection.ts how far the others may,
 *    τ'. A rejected leap halves it. Where no reaction leaps, or where min(τ', time to the next grid time or timed change) is below
 *    10 / a0, 100 steps of the direct method follow (both its uniforms a step, waiting time and choice), with what they pass on the
 *    way, and then 1 again. A network all of whose reactions are critical thus gives the bytes of the direct method.
 * 5. Draws, in this order: where some critical reaction can fire, a uniform for τ'' = −ln(1 − u) / (their sum). The leap is τ'',
 *    τ' or the time to the next grid time or timed change, whichever is least, the first of equals in the order change or grid
 *    time, τ', τ''. Where it is τ'', a uniform chooses the critical reaction that fires once at its end: the first whose prefix sum
 *    of critical propensities is above u · their sum. Then, in the order of the reactions, the firings of each that leaps and has a
 *    mean a_j · τ above 0, by poisson.ts.
 * 6. Each Poisson draw counts one event, and so does the critical reaction, whether the leap is then taken or rejected: work done.
 *    A replicate whose events pass its limit fails here, at the time of the leap's end.
 * 7. All changes are made at once. A leap that takes a count below 0 or above 2^31 − 1, or the state to bad propensities, is
 *    rejected: the state stays, τ' is halved, and 4 follows. The critical waiting time is drawn anew.
 * 8. Time becomes exactly the grid time or timed change where the leap ends there, else time + τ. Leaps therefore never reach across a
 *    grid time: the state there is a state that the method made, not one read off an interval, at the cost of at least one leap for
 *    each grid interval (or of exact steps where the grid is finer than ten firings).
 */

/** A reaction that could use up a reactant in fewer firings than this does not leap. */
export const criticalFirings = 10;
/** A leap must be worth this many exact steps, by the expected number of firings. */
export const leastFiringsOfLeap = 10;
/** Exact steps in a row where leaping is not worth it. */
export const exactStepsInARow = 100;
/** Expected firings of one leap at most, so that their numbers are whole numbers which a double holds. */
export const mostFiringsOfLeap = 2 ** 50;

/**
 * Networks of more reactions do not leap: the kernel's code grows with them, and each leap draws a number for each, which large
 * networks of few molecules never earn back.
 */
export const largestLeapingNetwork = 1_000;
