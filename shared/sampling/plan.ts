import { confidences } from '../catalog/measures.ts';
import type { BasisMeasure, PlanBasis } from '../contracts/planBasis.ts';
import type { PlanChoices, PlannedMeasureChoice } from '../contracts/planChoices.ts';
import type { ZoneDivision } from '../contracts/plans.ts';
import { AnalysisError } from '../analysis/analysisError.ts';
import { planForBudget, type Budget, type BudgetAnswer } from './budget.ts';
import { WORTH_DIVIDING } from './divideZone.ts';
import { betweenShare, handfulSeconds, handfulSpread } from './handful.ts';
import { adviseImpractical, type ImpracticalAdvice, type PracticalLimits } from './impractical.ts';
import { pilotQuotas } from './pilot.ts';
import { planCounts, planOfVisits, type PlanCounts } from './planCounts.ts';
import type { PlanMeasure, PlanQuestion } from './planQuestion.ts';
import { choicesJoined, pooledBasis } from './pooledZones.ts';
import { marginLadder, tradeOffCurves, type TradeOffCurve } from './tradeOff.ts';
import { walkSeconds } from './walkEstimate.ts';

/**
 * A plan from what is known of the ground (basis) and what a person chooses. The browser calls this while a slider
 * moves and the server calls it when the plan is saved: one answer. Cost: a few milliseconds.
 */
export interface PlanAnswer {
  readonly question: PlanQuestion;
  readonly counts: PlanCounts;
  /** Null when the plan is within its limits, and for a pilot. */
  readonly advice: ImpracticalAdvice | null;
  readonly limits: PracticalLimits;
}

/** `divisions`: how zones that ask for too much could be divided, where that was looked into. */
export function answerPlan(basis: PlanBasis, choices: PlanChoices, divisions: readonly ZoneDivision[] = []): PlanAnswer {
  const question = questionOf(basis, choices);
  const limits = limitsOf(basis, choices);
  if (choices.isPilot) {
    const quotas = pilotQuotas(question.zones.map(({ zone, vines, eligibleVines = vines }) => ({ zone, vines: eligibleVines })), { total: choices.pilotVines, minimumPerZone: minimumOf(basis, choices) });
    return { question, counts: planOfVisits(question, quotas.map(({ n }) => n)), advice: null, limits };
  }
  const counts = planCounts(question);
  const pooled = (one: string, other: string) => questionOf(basis, choicesJoined(choices, Number(one), Number(other)));
  return { question, counts, advice: adviseImpractical({ question, plan: counts, limits, confidences, pooled, divisions }), limits };
}

/** The same plan turned round: what the time, vines or money give. Margins keep the proportions that were chosen. */
export function answerBudget(basis: PlanBasis, choices: PlanChoices, budget: Budget): BudgetAnswer {
  return planForBudget(questionOf(basis, choices), budget);
}

/** Odd, so that the margin asked for is itself a step. */
const LADDER_STEPS = 41;
const LADDER_REACH = 3;

/** Vines of the whole plan against the margin of one measure, for each confidence on offer. */
export function answerTradeOff(basis: PlanBasis, choices: PlanChoices, code: string): TradeOffCurve[] {
  const question = questionOf(basis, choices);
  const margin = question.measures.find((measure) => measure.code === code)?.margin.value ?? 1;
  return tradeOffCurves(question, code, { confidences, margins: marginLadder(margin / LADDER_REACH, margin * LADDER_REACH, LADDER_STEPS) });
}

/** The calculation's own form of a plan. Throws AnalysisError for a measure the estate does not have. */
export function questionOf(unpooled: PlanBasis, choices: PlanChoices): PlanQuestion {
  const basis = pooledBasis(unpooled, choices.pools);
  return {
    zones: basis.zones.map((zone) => ({ zone: String(zone.number), vines: zone.vines, eligibleVines: zone.eligible, secondsMore: secondsMoreIn(unpooled, choices, zone.members ?? [zone.number]) })),
    measures: choices.measures.map((choice) => measureOf(basis, choices, choice)),
    question: choices.question,
    method: choices.allocation,
    effort: {
      secondsPerVine: choices.secondsPerVine,
      ...(basis.walks.length > 0 ? { walkSeconds: (vines: number) => walkSeconds(basis.walks, vines, choices.pace) } : {}),
      moneyPerHour: choices.moneyPerHour ?? basis.settings.costPerHour,
    },
    minimum: minimumOf(basis, choices),
  };
}

/** Seconds more at each vine of zones that are sampled as one: by their vines. */
function secondsMoreIn({ zones }: PlanBasis, { zoneSeconds }: PlanChoices, members: readonly number[]): number {
  const inPool = zones.filter(({ number }) => members.includes(number));
  const vines = inPool.reduce((sum, zone) => sum + zone.vines, 0);
  return inPool.reduce((sum, zone) => sum + (zone.vines / vines) * (zoneSeconds[String(zone.number)] ?? 0), 0);
}

/** Of a question, what time at a vine follows from. */
export interface TimesAtVine {
  readonly zones: readonly Pick<PlanQuestion['zones'][number], 'zone' | 'secondsMore'>[];
  readonly measures: readonly Pick<PlanMeasure, 'code' | 'secondsPerSample'>[];
  readonly effort: Pick<PlanQuestion['effort'], 'secondsPerVine'>;
}

/** Seconds at a vine of each zone, as they are sampled, for the measures taken there. */
export function secondsAtVine({ zones, measures, effort }: TimesAtVine): (zone: number, codes: readonly string[]) => number {
  const more = new Map(zones.map(({ zone, secondsMore = 0 }) => [Number(zone), secondsMore]));
  const perSample = new Map(measures.map(({ code, secondsPerSample }) => [code, secondsPerSample]));
  return (zone, codes) => effort.secondsPerVine + (more.get(zone) ?? 0) + codes.reduce((sum, code) => sum + (perSample.get(code) ?? 0), 0);
}

function measureOf(basis: PlanBasis, { isCautious, afterPilot, isPilot, population }: PlanChoices, choice: PlanChoices['measures'][number]): PlanMeasure {
  const known = basis.measures.find(({ code }) => code === choice.code);
  if (!known) throw new AnalysisError('measure_missing', `There is no measure "${choice.code}" in use in this estate. Choose another or add it.`);
  const pilots = afterPilot && !isPilot ? basis.zones.map((_, i) => known.pilots[i] ?? null) : [];
  const spreads = known.spreads.map(({ kind, value, cautious }, i) => {
    const found = pilots[i]?.spread ?? (isCautious ? cautious : value);
    return { kind, value: inHandful(choice.spreads?.[String(basis.zones[i]!.number)] ?? found, choice) };
  });
  return {
    code: known.code,
    margin: marginOf(known, choice),
    confidence: choice.confidence ?? known.confidence,
    spreads,
    expectedMeans: known.spreads.map(({ expectedMean }, i) => choice.means?.[String(basis.zones[i]!.number)] ?? expectedMean),
    // A typed spread is not the pilot's, so its rule does not hold for it.
    pilots: pilots.map((pilot, i) => (choice.spreads?.[String(basis.zones[i]!.number)] === undefined ? pilot : null)),
    ...finiteSharesOf(spreads, { population, handful: choice.handful }),
    secondsPerSample: choice.secondsPerSample ?? (choice.handful ? handfulSeconds(choice.handful) : known.secondsPerSample),
    ...(choice.moneyPerSample === undefined ? {} : { moneyPerSample: choice.moneyPerSample }),
  };
}

/** What reading every vine would leave unknown: all of it where the mean shall speak for more than these vines, and what differs within vines where that is known. */
function finiteSharesOf(spreads: PlanMeasure['spreads'], { population, handful }: Pick<PlanChoices, 'population'> & Pick<PlannedMeasureChoice, 'handful'>): Pick<PlanMeasure, 'finiteShares'> {
  if (population === 'endless') return { finiteShares: spreads.map(() => 0) };
  return handful ? { finiteShares: spreads.map(({ value }) => betweenShare(value, handful)) } : {};
}

function inHandful(spread: number, { handful }: PlanChoices['measures'][number]): number {
  return handful ? handfulSpread(spread, handful) : spread;
}

/** The margin in force: chosen for the plan, else the measure's own. */
function marginOf(known: BasisMeasure, { margin, marginKind }: PlanChoices['measures'][number]): PlanMeasure['margin'] {
  return { kind: marginKind ?? known.marginKind, value: margin ?? known.margin };
}

function minimumOf(basis: PlanBasis, { minimum }: PlanChoices): number {
  return minimum ?? basis.settings.floorVines;
}

function limitsOf(basis: PlanBasis, { limits, people }: PlanChoices): PracticalLimits {
  return { worthDividing: limits.worthDividing ?? WORTH_DIVIDING, visitsPerZone: limits.visitsPerZone ?? basis.settings.impracticalSamples, hours: limits.hours === undefined ? basis.settings.dayHours * people : limits.hours };
}
