/** Days after the end of a season that its fruit may still come in, such as grapes left to freeze. */
const lateDays = 120;

export interface SeasonDays {
  readonly startsOn: string;
  readonly endsOn: string;
}

/** Last day, yyyy-mm-dd, on which fruit of a season is picked or weighed. */
export function lastFruitDay({ endsOn }: SeasonDays): string {
  const last = new Date(`${endsOn}T00:00:00Z`);
  last.setUTCDate(last.getUTCDate() + lateDays);
  return last.toISOString().slice(0, 10);
}

/** Whether fruit of a season can be picked or weighed on a day: a typed year that is wrong lies outside. */
export function isFruitDay(day: string, season: SeasonDays): boolean {
  return day >= season.startsOn && day <= lastFruitDay(season);
}
