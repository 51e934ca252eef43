/** The probability that re-running `chosen` of `blocks` blocks, drawn without replacement, meets one of `altered` blocks. */
export function chanceOfFinding(options: { blocks: number; chosen: number; altered: number }): number {
  const { blocks, chosen, altered } = options;
  // 1 − hypergeometric(0): Π (blocks − altered − i) / (blocks − i).
  let missing = 1;
  for (let i = 0; i < chosen; i++) missing *= Math.max(0, blocks - altered - i) / (blocks - i);
  return 1 - missing;
}
