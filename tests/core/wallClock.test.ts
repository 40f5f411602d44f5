import { describe, expect, it } from 'vitest';
import { instantAt, wallClock } from '../../shared/season/wallClock.ts';

/** Offsets and changes of summer time as in the IANA time zone database (Europe/Paris 2026: 29 March and 25 October, 01:00 UTC). */
describe('the clock at the estate', () => {
  it.each([
    ['Europe/Paris', '2026-09-03T06:30', '2026-09-03T04:30:00.000Z'],
    ['Europe/Paris', '2026-12-02T00:15', '2026-12-01T23:15:00.000Z'],
    ['Africa/Johannesburg', '2026-02-01T06:00', '2026-02-01T04:00:00.000Z'],
    ['America/St_Johns', '2026-09-03T06:30', '2026-09-03T09:00:00.000Z'],
    ['Pacific/Auckland', '2026-01-01T00:00', '2025-12-31T11:00:00.000Z'],
    ['UTC', '2026-02-28T23:59', '2026-02-28T23:59:00.000Z'],
  ])('in %s shows %s at %s, and back', (zone, wall, instant) => {
    expect(instantAt(zone, wall).toISOString()).toBe(instant);
    expect(wallClock(zone, new Date(instant))).toBe(wall);
  });

  it('moves a time that summer time skips on by the gap, and takes the later of two', () => {
    expect(instantAt('Europe/Paris', '2026-03-29T02:30').toISOString()).toBe('2026-03-29T01:30:00.000Z');
    expect(instantAt('Europe/Paris', '2026-10-25T02:30').toISOString()).toBe('2026-10-25T01:30:00.000Z');
  });

  it('refuses what is no date and time', () => {
    expect(() => instantAt('UTC', '')).toThrow(RangeError);
    expect(() => instantAt('UTC', '3/9/2026 6:30')).toThrow('"3/9/2026 6:30" is no date and time');
  });
});
