/** Where a calendar month begins in a time zone. Zone rules come from the platform's own tables (Intl). */

const wallClock = (timeZone: string) =>
  new Intl.DateTimeFormat('en-US', {
    timeZone,
    calendar: 'gregory',
    numberingSystem: 'latn',
    hourCycle: 'h23',
    year: 'numeric',
    month: 'numeric',
    day: 'numeric',
    hour: 'numeric',
    minute: 'numeric',
    second: 'numeric',
  });

/** The wall clock of `atMs` in the zone, read as if it were UTC, in milliseconds. */
function localMs(format: Intl.DateTimeFormat, atMs: number): number {
  const parts = Object.fromEntries(format.formatToParts(atMs).map(({ type, value }) => [type, Number(value)]));
  const { year = 0, month = 1, day = 1, hour = 0, minute = 0, second = 0 } = parts;
  return Date.UTC(year, month - 1, day, hour, minute, second);
}

/**
 * The instant, in milliseconds since the epoch, at which the calendar month of `atMs` began in `timeZone` (an IANA
 * name). Where midnight of the first does not exist, the first instant after the gap.
 */
export function monthStartMs(atMs: number, timeZone: string): number {
  const format = wallClock(timeZone);
  const local = new Date(localMs(format, atMs));
  const wanted = Date.UTC(local.getUTCFullYear(), local.getUTCMonth(), 1);
  let instant = wanted;
  // The offset at the guess corrects the guess; twice suffices unless midnight falls into a gap.
  for (let round = 0; round < 2; round += 1) instant += wanted - localMs(format, instant);
  return instant;
}

/** The instant at which the day `later` days after `day` (`2026-12-01`) begins in `timeZone`, in milliseconds since the epoch. */
export function dayStartMs(day: string, timeZone: string, later = 0): number {
  const format = wallClock(timeZone);
  const wanted = Date.parse(`${day}T00:00:00Z`) + later * 86_400_000;
  let instant = wanted;
  for (let round = 0; round < 2; round += 1) instant += wanted - localMs(format, instant);
  return instant;
}

/** The calendar year of `atMs` in `timeZone`. */
export const yearIn = (atMs: number, timeZone: string): number =>
  new Date(localMs(wallClock(timeZone), atMs)).getUTCFullYear();

/** `2026-12-01`: the calendar day of `atMs` in `timeZone`. */
export const dayIn = (atMs: number, timeZone: string): string =>
  new Date(localMs(wallClock(timeZone), atMs)).toISOString().slice(0, 10);

/** `2026-12`: the calendar month of `atMs` in `timeZone`. */
export const monthIn = (atMs: number, timeZone: string): string =>
  new Date(localMs(wallClock(timeZone), atMs)).toISOString().slice(0, 7);

/** The month `count` months after `month` (`2026-12`), or before it. */
export function monthAfter(month: string, count = 1): string {
  const [year = 0, ordinal = 1] = month.split('-').map(Number);
  return new Date(Date.UTC(year, ordinal - 1 + count, 1)).toISOString().slice(0, 7);
}

/** Where `month` (`2026-12`) begins and the next one begins in `timeZone`, in milliseconds since the epoch. */
export function monthSpan(month: string, timeZone: string): { fromMs: number; toMs: number } {
  // No zone is as much as two days away from UTC, so the middle of the month lies in it everywhere.
  const startOf = (each: string) => monthStartMs(Date.parse(`${each}-15T12:00:00Z`), timeZone);
  return { fromMs: startOf(month), toMs: startOf(monthAfter(month)) };
}
