/** Arithmetic of the season line: days as ISO dates, places as shares 0…1 of the season. */

export interface Season {
  readonly startsOn: string;
  readonly endsOn: string;
}

export interface SeasonPhase {
  readonly id: string;
  readonly startsOn: string;
  readonly endsOn: string;
}

const dayMs = 86_400_000;
const day = (iso: string) => Date.parse(`${iso.slice(0, 10)}T00:00:00Z`);
export const isoDay = (ms: number) => new Date(ms).toISOString().slice(0, 10);

export function daysBetween(from: string, to: string): number {
  return Math.round((day(to) - day(from)) / dayMs);
}

export function addDays(from: string, days: number): string {
  return isoDay(day(from) + days * dayMs);
}

/** Place of a day on the line, held to its ends. */
export function seasonShare(season: Season, date: string): number {
  const length = daysBetween(season.startsOn, season.endsOn) + 1;
  return Math.min(1, Math.max(0, daysBetween(season.startsOn, date) / length));
}

/** First day of each week of the season, counted from its first day. */
export function weeksOf(season: Season): string[] {
  const weeks = Math.ceil((daysBetween(season.startsOn, season.endsOn) + 1) / 7);
  return Array.from({ length: weeks }, (_, week) => addDays(season.startsOn, week * 7));
}

/** First day of each month that begins within the season; crosses New Year as it comes. */
export function monthsOf(season: Season): string[] {
  const first = new Date(day(season.startsOn));
  const months: string[] = [];
  for (let month = first.getUTCMonth() + (first.getUTCDate() === 1 ? 0 : 1); ; month++) {
    const date = isoDay(Date.UTC(first.getUTCFullYear(), month, 1));
    if (date > season.endsOn) return months;
    months.push(date);
  }
}

/** The phase that holds a day, or null between phases. */
export function phaseAt(phases: readonly SeasonPhase[], date: string): SeasonPhase | null {
  return phases.find((phase) => date >= phase.startsOn && date <= phase.endsOn) ?? null;
}

/** Phases in the line's order from the season's record of begin and end. */
export function phasesFrom(record: Readonly<Record<string, readonly [string, string]>>): SeasonPhase[] {
  return Object.entries(record)
    .map(([id, [startsOn, endsOn]]) => ({ id, startsOn, endsOn }))
    .sort((one, other) => one.startsOn.localeCompare(other.startsOn));
}
