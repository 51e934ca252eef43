/** Credits as typed into a field, exact to the microcredit; an empty field is none. */

export const creditsField = (microcredits: number | null): string =>
  microcredits === null ? '' : (Number(BigInt(microcredits)) / 1_000_000).toString();

export type ParsedCredits = { ok: true; microcredits: number | null } | { ok: false };

/** "1,200.5" is 1,200,500,000 microcredits. No more than six decimals; nothing below a microcredit. */
export function parseCredits(text: string): ParsedCredits {
  const clean = text.trim().replaceAll(/[, ]/g, '');
  if (clean === '') return { ok: true, microcredits: null };
  const match = /^(\d{1,9})(?:\.(\d{0,6}))?$/.exec(clean);
  if (!match) return { ok: false };
  const microcredits = Number(match[1]) * 1_000_000 + Number((match[2] ?? '').padEnd(6, '0'));
  return microcredits > 0 ? { ok: true, microcredits } : { ok: false };
}
