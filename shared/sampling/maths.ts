import { matchMargin } from './margins.ts';
import { eligible, type PlanMeasure, type PlanQuestion } from './planQuestion.ts';
import { criticalT } from './quantiles.ts';
import { ADVISED_MINIMUM, halfWidth as halfWidthOf, sampleSizeSteps, steinSampleSize } from './sampleSize.ts';

/** A share of the expected mean in the measure's unit: of the spread, or of the margin. */
export interface Conversion {
  readonly of: 'spread' | 'margin';
  readonly share: number;
  readonly mean: number;
}

/** The numbers of a plan's formulas, one measure at a time, for whoever wants to check them by hand. */
export interface ZoneMaths {
  readonly zone: string;
  /** Vines in the zone, N. */
  readonly vines: number;
  /** Samples that this measure asks for, before others on the same walk. */
  readonly n: number;
  readonly spread: number;
  readonly margin: number;
  readonly t: number;
  readonly df: number;
  readonly halfWidth: number;
  /** With one vine fewer; NaN where that says nothing. */
  readonly oneFewer: number;
  /** First guess with the spread taken as known: (z·s/E)², and the same in N vines. */
  readonly normal: number;
  readonly normalInPopulation: number;
  /** What the margin and the floor ask for, before vines that may not be drawn are left out. */
  readonly wanted: number;
  readonly limitedBy: 'margin' | 'minimum' | 'population' | 'eligible';
  /** Share of the variance that reading every vine would take away. */
  readonly finiteShare: number;
  /** How spread and margin came to one scale; null where they were on one. */
  readonly conversion: Conversion | null;
  /** Where a pilot decides: its vines, and (t·s₁/E)² before rounding, without end and among the vines there are. */
  readonly pilot: { readonly n: number; readonly unrounded: number; readonly inPopulation: number } | null;
}

/** Per zone: the smallest n with t·s/√n·√(1 − f·n/N) ≤ E, never more than may be drawn, and every number in it. */
export function zoneMaths(question: PlanQuestion, code: string): ZoneMaths[] {
  const measure = question.measures.find((one) => one.code === code)!;
  return question.zones.map((zone, i) => {
    const { spread, margin } = matchMargin(measure.spreads[i]!, measure.margin, measure.expectedMeans[i]!);
    const asked = { spread, margin, confidence: measure.confidence, populationSize: zone.vines, finiteShare: measure.finiteShares?.[i] ?? 1 };
    const steps = sampleSizeSteps({ ...asked, ...(question.minimum === undefined ? {} : { minimum: question.minimum }) });
    const pilot = measure.pilots?.[i];
    const two = pilot ? steinSampleSize({ ...asked, pilotN: pilot.n, pilotDf: pilot.df, pilotSpread: spread }) : null;
    const floor = pilot ? Math.min(question.minimum ?? ADVISED_MINIMUM, zone.vines) : 0;
    const wanted = two ? Math.max(two.total, floor) : steps.n;
    const n = Math.min(wanted, eligible(zone));
    const df = pilot?.df ?? n - 1;
    const limitedBy = n < wanted ? 'eligible' : !two ? steps.limitedBy : two.total < floor ? 'minimum' : 'margin';
    return {
      zone: zone.zone, vines: zone.vines, spread, margin, finiteShare: asked.finiteShare, normal: steps.normal, normalInPopulation: steps.normalInPopulation,
      conversion: conversionOf(measure, i),
      n, wanted, df, limitedBy,
      t: df > 0 ? criticalT(measure.confidence, df) : Number.NaN,
      halfWidth: halfWidthOf({ ...asked, n, df }),
      oneFewer: two ? Number.NaN : halfWidthOf({ ...asked, n: n - 1 }),
      pilot: two && { n: pilot!.n, unrounded: two.unrounded, inPopulation: two.inPopulation },
    };
  });
}

function conversionOf({ spreads, margin, expectedMeans }: PlanMeasure, zone: number): Conversion | null {
  const { kind, value } = spreads[zone]!;
  const mean = Math.abs(expectedMeans[zone] ?? Number.NaN);
  if (kind === 'cv' && margin.kind === 'absolute') return { of: 'spread', share: value, mean };
  return kind === 'sd' && margin.kind === 'relative' ? { of: 'margin', share: margin.value, mean } : null;
}
