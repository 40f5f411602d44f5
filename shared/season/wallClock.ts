import { TZDateMini } from '@date-fns/tz';

const wallPattern = /^(\d{4})-(\d{2})-(\d{2})T(\d{2}):(\d{2})/;

/** What the clock at a place shows, as a field of date and time writes it: yyyy-mm-ddThh:mm. */
export function wallClock(timeZone: string, instant: Date): string {
  const there = new TZDateMini(instant.getTime(), timeZone);
  const two = (part: number) => String(part).padStart(2, '0');
  return `${String(there.getFullYear()).padStart(4, '0')}-${two(there.getMonth() + 1)}-${two(there.getDate())}T${two(there.getHours())}:${two(there.getMinutes())}`;
}

/**
 * The instant at which the clock at a place shows yyyy-mm-ddThh:mm. A time that summer time skips is moved on by the gap; of a
 * time that comes twice the later is meant, so that a restriction never ends too early. Throws RangeError for another text.
 */
export function instantAt(timeZone: string, wall: string): Date {
  const found = wallPattern.exec(wall);
  if (found === null) throw new RangeError(`"${wall}" is no date and time`);
  const [year, month, day, hour, minute] = found.slice(1).map(Number) as [number, number, number, number, number];
  const instant = new Date(new TZDateMini(year, month - 1, day, hour, minute, timeZone).getTime());
  const anHourLater = new Date(instant.getTime() + 3_600_000);
  return wallClock(timeZone, anHourLater) === wall.slice(0, 16) ? anHourLater : instant;
}
