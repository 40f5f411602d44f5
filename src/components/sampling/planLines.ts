import type { BasisMeasure, BasisSpread, PlanBasis } from '../../../shared/contracts/planBasis.ts';
import type { PlanChoices, PlannedMeasureChoice } from '../../../shared/contracts/planChoices.ts';
import { sdInterval } from '../../../shared/sampling/sdInterval.ts';
import type { PlanAnswer } from '../../../shared/sampling/plan.ts';
import type { Evidence } from '../base/evidence.ts';

/** A measure of the plan, or one that could be in it. */
export interface MeasureLine {
  readonly measure: BasisMeasure;
  readonly choice: PlannedMeasureChoice | null;
  /** Samples in all zones; null while it is not in the plan. */
  readonly needs: number | null;
  readonly drives: boolean;
  /** The widest of the spreads that decide its counts. */
  readonly spread: DecidingSpread;
}

/** The spread that decides a zone's count, and where it is from. */
export interface DecidingSpread extends Omit<BasisSpread, 'source'> {
  readonly source: BasisSpread['source'] | 'typed' | 'pilot';
}

/** Typed for this plan it decides; else the pilot's, where the plan goes by its rule; else what was found. `at`: place of the zone. */
export function decidingSpread(measure: BasisMeasure, at: number, plan: { readonly typed: number | undefined; readonly pilots: readonly unknown[] | undefined }): DecidingSpread {
  const found = measure.spreads[at]!;
  if (plan.typed !== undefined) return { ...found, value: plan.typed, df: null, n: 0, outliers: 0, source: 'typed' };
  const pilot = plan.pilots?.[at] ? measure.pilots[at] : undefined;
  return pilot ? { ...found, value: pilot.spread, df: pilot.df, n: pilot.n, outliers: 0, source: 'pilot' } : found;
}

export function measureLines(basis: PlanBasis, choices: PlanChoices, answer: PlanAnswer | null): MeasureLine[] {
  return basis.measures.map((measure) => {
    const choice = choices.measures.find(({ code }) => code === measure.code) ?? null;
    const pilots = answer?.question.measures.find(({ code }) => code === measure.code)?.pilots;
    const spreads = basis.zones.map(({ number }, at) => decidingSpread(measure, at, { typed: choice?.spreads?.[String(number)], pilots }));
    return {
      measure,
      choice,
      needs: answer?.counts.measures.find(({ code }) => code === measure.code)?.samples ?? null,
      drives: answer?.counts.drivers[0] === measure.code,
      spread: widestOf(spreads),
    };
  });
}

/** Spread of a zone as a figure: shares as percent of the mean, standard deviations in the measure's unit. */
export function spreadEvidence(spread: DecidingSpread, measure: BasisMeasure, words: { ofMean: string }): Evidence {
  const scale = spread.kind === 'cv' ? 100 : 1;
  const isAssumed = spread.source === 'trade' || spread.source === 'typed';
  const range = spread.df !== null && spread.df >= 1 ? sdInterval(spread.value, spread.df, 0.95) : null;
  return {
    value: spread.value * scale,
    halfWidth: null,
    ...(range ? { low: range.lower * scale, high: range.upper * scale } : {}),
    unit: spread.kind === 'cv' ? words.ofMean : measure.unit,
    decimals: spread.kind === 'cv' ? 0 : Math.min(2, measure.decimals + 1),
    n: isAssumed ? null : spread.n,
    confidence: range ? 0.95 : null,
    kind: isAssumed ? 'assumed' : spread.source === 'zone' || spread.source === 'pilot' ? 'measured' : 'estimated',
  };
}

/** The widest of the zones: what a plan for each zone has to live with. */
export function widestSpread(measure: BasisMeasure): BasisSpread {
  return widestOf(measure.spreads);
}

function widestOf<Spread extends { readonly value: number }>(spreads: readonly Spread[]): Spread {
  return spreads.reduce((widest, spread) => (spread.value > widest.value ? spread : widest));
}

/** "2024–2026" for seasons in a row, else the list. */
export function seasonWords(seasons: readonly number[], list: (years: string[]) => string): string {
  const years = [...seasons].sort((a, b) => a - b);
  const [first, last] = [years[0], years.at(-1)];
  if (first === undefined || last === undefined) return '';
  return years.length > 1 && last - first === years.length - 1 ? `${first}–${last}` : list(years.map(String));
}
