/** The charge of events before rounding, for explaining it. */

/** events × rate / 10^6 microcredits in credits with all digits that are not zero: `18.2000005`. */
export function exactChargeText(events: bigint | number, microcreditsPerMillionEvents: bigint | number): string {
  const digits = (BigInt(events) * BigInt(microcreditsPerMillionEvents)).toString().padStart(13, '0');
  const fraction = digits.slice(-12).replace(/0+$/, '');
  return fraction === '' ? digits.slice(0, -12) : `${digits.slice(0, -12)}.${fraction}`;
}
