import { blockPrecision } from './blockSampleSize.ts';
import { matchMargin, type MatchedMargin } from './margins.ts';
import { draftOf, type Draft } from './planDraft.ts';
import { blockDemand, checkQuestion, type PlanMeasure, type PlanQuestion, type PlanZone } from './planQuestion.ts';
import { halfWidth } from './sampleSize.ts';
import { spreadOf } from './severalMeasures.ts';

/**
 * Counts, hours and precision of a whole plan: several zones, several measures, one walk.
 * In: zones with vines, measures with margins and planning spreads. Out: vines to visit and samples per measure in
 * each zone, what drives them, and the half-width each will have if the spreads are as assumed.
 * Cost: well under a millisecond per zone and measure, so the browser can call it while a slider moves.
 */
export interface PlannedZone {
  readonly zone: string;
  /** Vines to visit. */
  readonly visits: number;
  /** Samples by measure, in the order of the measures. */
  readonly counts: readonly number[];
  /** Measures that ask for the visits; empty when the floor does. */
  readonly drivers: readonly string[];
  /** On the scale of each measure's margin (unit, or share of the mean). NaN below two samples. */
  readonly halfWidths: readonly number[];
  readonly hours: number;
}

export interface PlannedMeasure {
  readonly code: string;
  readonly samples: number;
  /** Half-width of the mean over all zones, on the scale of the margin. */
  readonly blockHalfWidth: number;
  /** False when all eligible vines miss the margin that was asked for. */
  readonly reached: boolean;
}

export interface PlanCounts {
  readonly zones: readonly PlannedZone[];
  readonly measures: readonly PlannedMeasure[];
  readonly visits: number;
  readonly hours: number;
  /** The part of the hours that is spent on foot between vines; 0 where it lies in the time per vine. */
  readonly walkingHours: number;
  readonly money: number;
  /** Measures that decide the total, the heaviest first. */
  readonly drivers: readonly string[];
}

export function planCounts(question: PlanQuestion): PlanCounts {
  checkQuestion(question);
  return measureUp(question, draftOf(question));
}

/** The plan that given visits make, with every measure taken at each of them: a pilot, whose counts no margin decides. */
export function planOfVisits(question: PlanQuestion, visits: readonly number[]): PlanCounts {
  checkQuestion(question);
  return measureUp(question, { visits, counts: question.measures.map(() => visits), zoneDrivers: question.zones.map(() => []), drivers: [] });
}

/** Hours, money and the half-widths that the counts will give. */
function measureUp(question: PlanQuestion, draft: Draft): PlanCounts {
  const { zones, measures, effort } = question;
  const visits = draft.visits.reduce((sum, n) => sum + n, 0);
  const walking = effort.walkSeconds?.(visits) ?? 0;
  const planned = zones.map((zone, i): PlannedZone => {
    const counts = draft.counts.map((row) => row[i]!);
    const sampling = measures.reduce((sum, measure, j) => sum + measure.secondsPerSample * counts[j]!, 0);
    const onFoot = visits > 0 ? (walking * draft.visits[i]!) / visits : 0;
    const seconds = onFoot + (effort.secondsPerVine + (zone.secondsMore ?? 0)) * draft.visits[i]! + sampling;
    const halfWidths = measures.map((measure, j) => zoneHalfWidth(measure, { zone, i, n: counts[j]! }));
    return { zone: zone.zone, visits: draft.visits[i]!, counts, drivers: draft.zoneDrivers[i]!, halfWidths, hours: seconds / 3600 };
  });
  const hours = planned.reduce((sum, zone) => sum + zone.hours, 0);
  const inMeasure = measures.map((measure, j): PlannedMeasure => {
    const samples = draft.counts[j]!.reduce((sum, n) => sum + n, 0);
    const blockHalfWidth = halfWidthOfBlock(question, measure, draft.counts[j]!);
    const widest = question.question === 'block' ? blockHalfWidth : Math.max(...planned.map((zone) => zone.halfWidths[j]!));
    return { code: measure.code, samples, blockHalfWidth, reached: widest <= measure.margin.value * (1 + 1e-9) };
  });
  const money = hours * (effort.moneyPerHour ?? 0) + measures.reduce((sum, measure, j) => sum + (measure.moneyPerSample ?? 0) * inMeasure[j]!.samples, 0);
  return { zones: planned, measures: inMeasure, visits, hours, walkingHours: walking / 3600, money, drivers: draft.drivers };
}

function zoneHalfWidth(measure: PlanMeasure, { zone, i, n }: { zone: PlanZone; i: number; n: number }): number {
  const matched: MatchedMargin = matchMargin(measure.spreads[i]!, measure.margin, measure.expectedMeans[i]!);
  const pilot = measure.pilots?.[i];
  // After a pilot the interval is made with the pilot's spread and its degrees of freedom: that is what keeps the coverage.
  const width = halfWidth({ spread: matched.spread, n, confidence: measure.confidence, populationSize: zone.vines, finiteShare: measure.finiteShares?.[i], ...(pilot ? { df: pilot.df } : {}) });
  // `matched.margin` may be in units while the margin is a share: back to the scale of the margin.
  return (width * measure.margin.value) / matched.margin;
}

function halfWidthOfBlock(question: PlanQuestion, measure: PlanMeasure, counts: readonly number[]): number {
  const demand = blockDemand(question, measure);
  const priced = question.zones.map((zone, i) => ({ vines: zone.vines, ...spreadOf(demand, i) }));
  return (blockPrecision(priced, counts, { confidence: measure.confidence }).halfWidth * measure.margin.value) / demand.margin;
}
