import { groupReadings, poolGroups, type HistoryReading } from './pooling.ts';
import { summarise } from './variances.ts';

/** What a pilot says of a measure in one zone: readings, degrees of freedom and spread, pooled within its visits. */
export interface PilotReadings {
  readonly n: number;
  readonly df: number;
  readonly spread: number;
  /** Of all its readings; null in plans made before it was kept. */
  readonly mean: number | null;
}

/** One entry a zone; null where fewer than two vines were read. No season weighs less: a pilot is of one season. */
export function pilotReadingsOf(readings: readonly HistoryReading[], ask: { readonly zones: readonly string[]; readonly kind: 'sd' | 'cv'; readonly season: number }): (PilotReadings | null)[] {
  const { zones, kind, season } = ask;
  const groups = groupReadings(readings);
  return zones.map((zone) => {
    const own = groups.filter((group) => group.zone === zone);
    const { n, df, spread } = poolGroups(own, { kind, season, seasonWeight: 1 });
    return df >= 1 ? { n, df: Math.round(df), spread, mean: summarise(own.flatMap(({ values }) => values)).mean } : null;
  });
}
