import { instantAt } from './wallClock.ts';

/**
 * First moment of a calendar day at a place, and the first of the next: a day has 23 to 25 hours where clocks are changed.
 * `dayBounds('Pacific/Auckland', '2026-01-10')` begins at 2026-01-09T11:00Z. An unknown time zone counts as UTC.
 */
export function dayBounds(timeZone: string, day: string): { from: Date; to: Date } {
  const next = new Date(Date.parse(`${day}T00:00:00Z`) + 86_400_000).toISOString().slice(0, 10);
  return { from: startOf(timeZone, day), to: startOf(timeZone, next) };
}

function startOf(timeZone: string, day: string): Date {
  const start = instantAt(timeZone, `${day}T00:00`);
  return Number.isNaN(start.getTime()) ? new Date(`${day}T00:00:00Z`) : start;
}
