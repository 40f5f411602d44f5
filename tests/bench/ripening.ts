import { parseArgs } from 'node:util';
import { pathToFileURL } from 'node:url';
import { randomNormal, seededRandom, type Random } from '../../shared/analysis/random.ts';
import { backTestSteps, judgeBackTest, type BackTestStep } from '../../shared/ripening/backTest.ts';
import { findBend } from '../../shared/ripening/bend.ts';
import { forecastDay, forecastTarget } from '../../shared/ripening/forecast.ts';
import { fitTrend, type VisitPoint } from '../../shared/ripening/trend.ts';
import { changeBetween, changeOfSameVines } from '../../shared/sampling/change.ts';
import { meanEstimate } from '../../shared/sampling/precision.ts';
import { summarise } from '../../shared/sampling/variances.ts';

/**
 * Do ripening forecasts hold as often as they say, and how often is noise called a change? Simulated seasons of one
 * zone: visits a week apart, a straight or a flattening truth, vines drawn anew at each visit.
 * Run: npx tsx tests/bench/ripening.ts [--seasons 2000] [--seed 1]
 */
interface Truth {
  readonly id: 'linear' | 'flattening';
  readonly brixAt: (day: number) => number;
}

/** 0.2 °Brix a day throughout, or the same at first with a ceiling of 26 °Brix (halving its pace in about a month). */
const TRUTHS: readonly Truth[] = [
  { id: 'linear', brixAt: (day) => 17 + 0.2 * day },
  { id: 'flattening', brixAt: (day) => 26 - 9 * Math.exp((-0.2 / 9) * day) },
];

const VINE_SD = 1.1;
const LEVELS = [0.9, 0.95, 0.99];

interface Season {
  readonly truth: Truth;
  readonly visits: number;
  readonly vines: number;
  readonly confidence: number;
}

export interface ForecastCoverage {
  readonly truth: Truth['id'];
  readonly visits: number;
  readonly confidence: number;
  readonly seasons: number;
  /** Share of seasons in which the next visit lay in its band. */
  readonly visitHeld: number;
  /** Share in which the true mean lay in the band of the line. */
  readonly lineHeld: number;
  /** Share of seasons that gave a date range, and share of these that held the true day. */
  readonly datesGiven: number;
  readonly dateHeld: number | null;
}

function visitMean(truth: Truth, day: number, { vines, random }: { vines: number; random: Random }): number {
  return truth.brixAt(day) + (VINE_SD / Math.sqrt(vines)) * randomNormal(random);
}

/** The last visits before day 42, a week apart; the forecast is for a visit a week later. */
export function forecastCoverage(season: Season, how: { readonly seasons: number; readonly random: Random }): ForecastCoverage {
  const { truth, visits, vines, confidence } = season;
  const { seasons, random } = how;
  const counts = { visitHeld: 0, lineHeld: 0, given: 0, dateHeld: 0 };
  const target = truth.brixAt(49);
  for (let i = 0; i < seasons; i++) {
    const points: VisitPoint[] = Array.from({ length: visits }, (_, v) => {
      const day = 42 - 7 * (visits - 1 - v);
      return { day, value: visitMean(truth, day, { vines, random }) };
    });
    const trend = fitTrend(points, { confidence });
    if (trend.kind !== 'trend') throw new Error(trend.reason);
    const next = forecastDay(trend, 49);
    const actual = visitMean(truth, 49, { vines, random });
    if (actual >= next.visit.lower && actual <= next.visit.upper) counts.visitHeld += 1;
    if (target >= next.line.lower && target <= next.line.upper) counts.lineHeld += 1;
    const date = forecastTarget(trend, target);
    if (date.kind !== 'range') continue;
    counts.given += 1;
    if (date.lower <= 49 && date.upper >= 49) counts.dateHeld += 1;
  }
  return {
    truth: truth.id,
    visits,
    confidence,
    seasons,
    visitHeld: counts.visitHeld / seasons,
    lineHeld: counts.lineHeld / seasons,
    datesGiven: counts.given / seasons,
    dateHeld: counts.given > 0 ? counts.dateHeld / counts.given : null,
  };
}

export interface FalseAlarms {
  readonly guard: 'newVines' | 'sameVines' | 'slope';
  readonly confidence: number;
  readonly seasons: number;
  /** Share of seasons without any change in which one was claimed; nominal is 1 − confidence. */
  readonly alarms: number;
}

/** Nothing changes at all; every word other than "not distinguishable" is a false alarm. */
export function falseAlarms(guard: FalseAlarms['guard'], confidence: number, how: { readonly seasons: number; readonly random: Random }): FalseAlarms {
  const { seasons, random } = how;
  let alarms = 0;
  for (let i = 0; i < seasons; i++) if (claimsChange(guard, confidence, random)) alarms += 1;
  return { guard, confidence, seasons, alarms: alarms / seasons };
}

function claimsChange(guard: FalseAlarms['guard'], confidence: number, random: Random): boolean {
  const vines = 12;
  const sample = () => Array.from({ length: vines }, () => 22 + VINE_SD * randomNormal(random));
  if (guard === 'newVines') return changeBetween(meanEstimate(summarise(sample())), meanEstimate(summarise(sample())), confidence).word !== 'notDistinguishable';
  if (guard === 'sameVines') {
    const vinesOwn = sample();
    const read = () => vinesOwn.map((value) => value + 0.4 * randomNormal(random));
    return changeOfSameVines(read(), read(), confidence).word !== 'notDistinguishable';
  }
  const points = [0, 7, 14, 21, 28].map((day) => ({ day, value: summarise(sample()).mean }));
  const trend = fitTrend(points, { confidence });
  return trend.kind === 'trend' && trend.word !== 'notDistinguishable';
}

export interface BackTestResult {
  readonly truth: Truth['id'];
  readonly forecasts: number;
  readonly trendError: number;
  readonly noChangeError: number;
  readonly beatsNoChange: boolean | null;
}

export interface BendSeen {
  readonly truth: Truth['id'];
  readonly visits: number;
  /** Share of seasons in which ripening was called slowing. */
  readonly slowing: number;
}

/** How often weekly visits up to day 42 show that ripening slows. */
export function bendSeen(truth: Truth, visits: number, { seasons, random }: { readonly seasons: number; readonly random: Random }): BendSeen {
  let slowing = 0;
  for (let i = 0; i < seasons; i++) {
    const points = Array.from({ length: visits }, (_, v) => ({ day: 42 - 7 * v, value: visitMean(truth, 42 - 7 * v, { vines: 12, random }) }));
    const bend = findBend(points, 0.95);
    if (bend.kind === 'bend' && bend.word === 'slowing') slowing += 1;
  }
  return { truth: truth.id, visits, slowing: slowing / seasons };
}

/** Eight weekly visits a season, each forecast from those before it. */
export function backTestTruth(truth: Truth, { seasons, random }: { readonly seasons: number; readonly random: Random }): BackTestResult {
  const steps: BackTestStep[] = [];
  for (let i = 0; i < seasons; i++) {
    const points = Array.from({ length: 8 }, (_, v) => ({ day: 7 * v, value: visitMean(truth, 7 * v, { vines: 12, random }) }));
    steps.push(...backTestSteps(points, { confidence: 0.95 }));
  }
  const { n, trendError, noChangeError, beatsNoChange } = judgeBackTest(steps);
  return { truth: truth.id, forecasts: n, trendError, noChangeError, beatsNoChange };
}

export function runRipening({ seasons, seed }: { readonly seasons: number; readonly seed: number }): { readonly forecast: ForecastCoverage[]; readonly falseAlarms: FalseAlarms[]; readonly backTest: BackTestResult[]; readonly bend: BendSeen[] } {
  const random = seededRandom(seed);
  const how = { seasons, random };
  return {
    forecast: TRUTHS.flatMap((truth) => [3, 4, 5].flatMap((visits) => LEVELS.map((confidence) => forecastCoverage({ truth, visits, vines: 12, confidence }, how)))),
    falseAlarms: (['newVines', 'sameVines', 'slope'] as const).flatMap((guard) => LEVELS.map((confidence) => falseAlarms(guard, confidence, how))),
    backTest: TRUTHS.map((truth) => backTestTruth(truth, { seasons: Math.min(seasons, 500), random })),
    bend: TRUTHS.flatMap((truth) => [5, 7].map((visits) => bendSeen(truth, visits, how))),
  };
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
  const { values } = parseArgs({ options: { seasons: { type: 'string', default: '2000' }, seed: { type: 'string', default: '1' } }, strict: false });
  console.log(JSON.stringify(runRipening({ seasons: Number(values.seasons), seed: Number(values.seed) }), null, 1));
}
