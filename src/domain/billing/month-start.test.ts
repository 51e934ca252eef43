import { describe, expect, it } from 'vitest';
import { monthStartMs, yearIn } from './month-start.ts';

const start = (at: string, zone: string) => new Date(monthStartMs(Date.parse(at), zone)).toISOString();

// Source: the IANA time zone database as shipped with the platform; offsets below from memory.
describe('monthStartMs', () => {
  it.each([
    ['2026-12-01T00:00:00Z', 'UTC', '2026-12-01T00:00:00.000Z'],
    ['2026-12-01T04:59:59Z', 'America/New_York', '2026-11-01T04:00:00.000Z'],
    ['2026-12-01T05:00:00Z', 'America/New_York', '2026-12-01T05:00:00.000Z'],
    ['2026-07-15T12:00:00Z', 'Europe/Berlin', '2026-06-30T22:00:00.000Z'],
    ['2026-12-31T23:30:00Z', 'Europe/Berlin', '2026-12-31T23:00:00.000Z'],
    ['2026-03-10T00:00:00Z', 'Asia/Kathmandu', '2026-02-28T18:15:00.000Z'],
  ])('at %s in %s the month began %s', (at, zone, expected) => expect(start(at, zone)).toBe(expected));

  it('tells the year on the wall, not in UTC', () => {
    expect(yearIn(Date.parse('2026-12-31T23:30:00Z'), 'Europe/Berlin')).toBe(2027);
  });
});
