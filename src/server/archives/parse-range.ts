/** Reads a Range header (RFC 9110, section 14) with a single byte range; several are answered with the whole. */

export interface ByteRange {
  start: number;
  /** Inclusive. */
  end: number;
}

/** Null: no range, or one to ignore as the standard allows. */
export function parseRange(header: string | null, size: number): ByteRange | 'unsatisfiable' | null {
  const match = /^bytes=(\d{0,15})-(\d{0,15})$/.exec(header?.trim() ?? '');
  if (!match) return null;
  const [first, last] = [match[1]!, match[2]!];
  if (first === '' && last === '') return null;
  if (first === '') {
    const suffix = Math.min(Number(last), size);
    return suffix === 0 ? 'unsatisfiable' : { start: size - suffix, end: size - 1 };
  }
  const start = Number(first);
  if (last !== '' && Number(last) < start) return null;
  if (start >= size) return 'unsatisfiable';
  return { start, end: last === '' ? size - 1 : Math.min(Number(last), size - 1) };
}
