import { blockSampleSize } from './blockSampleSize.ts';
import { matchMargin } from './margins.ts';
import { blockDemand, eligible, type PlanEffort, type PlanMeasure, type PlanQuestion } from './planQuestion.ts';
import { ADVISED_MINIMUM, steinSampleSize } from './sampleSize.ts';
import { everyZoneCounts, leastCostForAll, leastCostForOne, spreadOf, trimToVisited, type MeasureDemand, type SharedZone } from './severalMeasures.ts';

/** Which vines and samples a plan asks for, before hours and precision are reckoned. */
export interface Draft {
  readonly visits: readonly number[];
  /** Measure × zone. */
  readonly counts: readonly (readonly number[])[];
  readonly zoneDrivers: readonly (readonly string[])[];
  readonly drivers: readonly string[];
}

export function draftOf(question: PlanQuestion): Draft {
  return question.question === 'eachZone' ? draftEachZone(question) : draftBlock(question);
}

/** A vine more costs about this much walking where some forty are visited: what zones are weighed with, whatever the plan comes to. */
function walkPerVine({ walkSeconds }: PlanEffort): number {
  return walkSeconds ? (walkSeconds(60) - walkSeconds(20)) / 40 : 0;
}

/** Zones with what a vine there costs: seconds for setting up, walking and all its samples. */
export function sharedZones(question: PlanQuestion): SharedZone[] {
  const { effort, measures } = question;
  const seconds = effort.secondsPerVine + walkPerVine(effort) + measures.reduce((sum, measure) => sum + measure.secondsPerSample, 0);
  return question.zones.map((zone) => ({ vines: zone.vines, cost: seconds + (zone.secondsMore ?? 0), minimum: question.minimum ?? ADVISED_MINIMUM, maximum: eligible(zone) }));
}

function draftEachZone(question: PlanQuestion): Draft {
  const { zones, measures } = question;
  const perMeasure = measures.map((measure) =>
    zones.map((zone, i) => {
      const matched = matchMargin(measure.spreads[i]!, measure.margin, measure.expectedMeans[i]!);
      const pilot = measure.pilots?.[i];
      const finiteShares = [measure.finiteShares?.[i] ?? 1];
      if (pilot) {
        const { total } = steinSampleSize({ pilotN: pilot.n, pilotDf: pilot.df, pilotSpread: matched.spread, margin: matched.margin, confidence: measure.confidence, populationSize: zone.vines, finiteShare: finiteShares[0] });
        const floor = Math.min(question.minimum ?? ADVISED_MINIMUM, zone.vines);
        return { n: Math.min(Math.max(total, floor), eligible(zone)), byFloor: total < floor };
      }
      const demand: MeasureDemand = { code: measure.code, spreads: [matched.spread], margin: matched.margin, confidence: measure.confidence, finiteShares };
      const [answer] = everyZoneCounts([{ vines: zone.vines, minimum: question.minimum ?? ADVISED_MINIMUM }], [demand]);
      return { n: Math.min(answer!.n, eligible(zone)), byFloor: answer!.driver === null };
    }),
  );
  const counts = perMeasure.map((row) => row.map(({ n }) => n));
  const visits = zones.map((_, i) => Math.max(...counts.map((row) => row[i]!)));
  const zoneDrivers = zones.map((_, i) => measures.filter((_measure, j) => counts[j]![i] === visits[i] && !perMeasure[j]![i]!.byFloor).map(({ code }) => code));
  return { visits, counts, zoneDrivers, drivers: heaviestFirst(measures, zoneDrivers, visits) };
}

/** Measures by the number of vines they ask for. */
function heaviestFirst(measures: readonly PlanMeasure[], zoneDrivers: readonly (readonly string[])[], visits: readonly number[]): string[] {
  const weights = measures.map(({ code }) => ({ code, vines: visits.reduce((sum, n, i) => (zoneDrivers[i]!.includes(code) ? sum + n : sum), 0) }));
  return weights.filter(({ vines }) => vines > 0).sort((a, b) => b.vines - a.vines).map(({ code }) => code);
}

function draftBlock(question: PlanQuestion): Draft {
  const { zones, measures, method = 'leastCost' } = question;
  const demands = measures.map((measure) => blockDemand(question, measure));
  const shared = sharedZones(question);
  // Where every sample costs the same, the cheapest counts for one measure are those shared by spread.
  const costsAlike = shared.every(({ cost }) => cost === shared[0]!.cost);
  const isAlone = method === 'leastCost' && measures.length === 1;
  const byCounts = isAlone && costsAlike ? 'spread' : method;
  if (isAlone && !costsAlike) {
    const { counts, atMinimum } = leastCostForOne(shared, demands[0]!);
    const drivers = atMinimum ? [] : [measures[0]!.code];
    return { visits: counts, counts: [counts], zoneDrivers: zones.map(() => drivers), drivers };
  }
  if (byCounts === 'leastCost') {
    const answer = leastCostForAll(shared, demands);
    const zoneDrivers = zones.map((_, i) => (answer.counts[i]! > Math.min(shared[i]!.minimum!, shared[i]!.maximum!) ? answer.binding : []));
    return { visits: answer.counts, counts: trimToVisited(shared, demands, answer.counts), zoneDrivers, drivers: answer.binding };
  }
  const answers = demands.map((demand) => {
    const priced = shared.map((zone, i) => ({ ...zone, ...spreadOf(demand, i) }));
    return blockSampleSize({ zones: priced, margin: demand.margin, confidence: demand.confidence, method: byCounts });
  });
  const counts = answers.map((answer) => answer.counts);
  const visits = zones.map((_, i) => Math.max(...counts.map((row) => row[i]!)));
  const zoneDrivers = zones.map((_, i) => measures.filter((_measure, j) => counts[j]![i] === visits[i] && !answers[j]!.atMinimum).map(({ code }) => code));
  return { visits, counts, zoneDrivers, drivers: heaviestFirst(measures, zoneDrivers, visits) };
}
