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
}

export function measureLines(basis: PlanBasis, choices: PlanChoices, answer: PlanAnswer | null): MeasureLine[] {
  return basis.measures.map((measure) => ({
    measure,
    choice: choices.measures.find(({ code }) => code === measure.code) ?? null,
    needs: answer?.counts.measures.find(({ code }) => code === measure.code)?.samples ?? null,
    drives: answer?.counts.drivers[0] === measure.code,
  }));
}

/** Spread of a zone as a figure: shares as percent of the mean, standard deviations in the measure's unit. */
export function spreadEvidence(spread: BasisSpread, measure: BasisMeasure, words: { ofMean: string }): Evidence {
  const scale = spread.kind === 'cv' ? 100 : 1;
  const range = spread.df !== null && spread.df >= 1 ? sdInterval(spread.value, spread.df, 0.95) : null;
  return {
    value: spread.value * scale,
    halfWidth: null,
    ...(range ? { low: range.lower * scale, high: range.upper * scale } : {}),
    unit: spread.kind === 'cv' ? words.ofMean : measure.unit,
    decimals: spread.kind === 'cv' ? 0 : Math.min(2, measure.decimals + 1),
    n: spread.source === 'trade' ? null : spread.n,
    confidence: range ? 0.95 : null,
    kind: spread.source === 'zone' ? 'measured' : spread.source === 'trade' ? 'assumed' : 'estimated',
  };
}

/** The widest of the zones: what a plan for each zone has to live with. */
export function widestSpread(measure: BasisMeasure): BasisSpread {
  return measure.spreads.reduce((widest, spread) => (spread.value > widest.value ? spread : widest));
}

/** "2024–2026" for seasons in a row, else the list. */
export function seasonWords(seasons: readonly number[], list: (years: string[]) => string): string {
  const years = [...seasons].sort((a, b) => a - b);
  const [first, last] = [years[0], years.at(-1)];
  if (first === undefined || last === undefined) return '';
  return years.length > 1 && last - first === years.length - 1 ? `${first}–${last}` : list(years.map(String));
}
