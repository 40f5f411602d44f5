export interface SeasonSpan {
  readonly name: string;
  readonly startsOn: string;
  readonly endsOn: string;
}

/** Twelve months from the season's first month, named by the year or years they touch. */
export function seasonAround(today: string, startMonth: number): SeasonSpan {
  const year = Number(today.slice(0, 4));
  const month = Number(today.slice(5, 7));
  const startYear = month >= startMonth ? year : year - 1;
  const startsOn = `${startYear}-${String(startMonth).padStart(2, '0')}-01`;
  const last = new Date(Date.UTC(startYear + 1, startMonth - 1, 0));
  const endsOn = last.toISOString().slice(0, 10);
  // A season that begins in the last quarter belongs to the year of its vintage; one across mid-year names both.
  const name = startMonth === 1 ? String(startYear) : startMonth >= 10 ? String(startYear + 1) : `${startYear}/${String(startYear + 1).slice(2)}`;
  return { name, startsOn, endsOn };
}

/** Year of the vintage of a season: the year in which its eighth month begins. A season from December 2025 and one from July 2025 both ripen in 2026. */
export function vintageYear({ startsOn }: Pick<SeasonSpan, 'startsOn'>): number {
  const [year, month] = startsOn.split('-').map(Number) as [number, number];
  return new Date(Date.UTC(year, month - 1 + 7, 1)).getUTCFullYear();
}

/** Seasons to be made so that every day (YYYY-MM-DD) lies in one, cut to the gaps between those there are; oldest first. */
export function missingSeasons(days: readonly string[], seasons: readonly SeasonSpan[], startMonth: number): SeasonSpan[] {
  const made: SeasonSpan[] = [];
  const holds = (day: string) => ({ startsOn, endsOn }: SeasonSpan) => startsOn <= day && day <= endsOn;
  for (const day of [...new Set(days)].sort()) {
    if ([...seasons, ...made].some(holds(day))) continue;
    const span = seasonAround(day, startMonth);
    const others = [...seasons, ...made];
    const before = others.map(({ endsOn }) => endsOn).filter((end) => end < day).sort().at(-1);
    const after = others.map(({ startsOn }) => startsOn).filter((start) => start > day).sort()[0];
    const startsOn = before !== undefined && before >= span.startsOn ? dayBeside(before, 1) : span.startsOn;
    const endsOn = after !== undefined && after <= span.endsOn ? dayBeside(after, -1) : span.endsOn;
    const isTaken = others.some(({ name }) => name === span.name);
    made.push({ name: isTaken ? `${span.name} (${startsOn})` : span.name, startsOn, endsOn });
  }
  return made;
}

function dayBeside(day: string, by: number): string {
  return new Date(Date.parse(`${day}T00:00:00Z`) + by * 86_400_000).toISOString().slice(0, 10);
}
