import { measures as catalogue } from '../../shared/catalog/measures.ts';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import { planChoices } from '../../shared/contracts/planChoices.ts';
import type { XY } from '../../shared/geo/coordinates.ts';
import { layRows } from '../../shared/geo/rowsLayout.ts';
import { vineTable } from '../../shared/geo/vines.ts';
import { drawPlan } from '../../shared/sampling/drawPlan.ts';
import { answerPlan, answerTradeOff, secondsAtVine } from '../../shared/sampling/plan.ts';

const [widthM, lengthM, zoneCount] = [400, 250, 5];
const codes = ['brix', 'ph', 'ta', 'clusterCount', 'clusterWeight', 'berryWeight'];

/** CPU milliseconds of a plan on ten hectares, five zones and six measures: counts, the picture of them, and vines with their walk. */
export function benchPlan(runs: number): { counts: number; picture: number; drawAndWalk: number; vines: number; visits: number }[] {
  const ring: XY[] = [[0, 0], [widthM, 0], [widthM, lengthM], [0, lengthM], [0, 0]];
  const rows = layRows([[ring]], { originXY: [0, 0], gridBearingDeg: 0 }, { rowSpacingM: 2.5, vineSpacingM: 1.2, headlandM: 5 });
  const table = vineTable(rows);
  const zoneOfVine = Uint8Array.from(table.x, (x) => 1 + Math.min(zoneCount - 1, Math.floor((x / widthM) * zoneCount)));
  const basis = basisOf(zoneOfVine);
  return (['eachZone', 'block'] as const).flatMap((question) => Array.from({ length: runs }, () => {
    const choices = planChoices.parse({ measures: codes.map((code) => ({ code, ...(code === 'clusterWeight' ? { margin: 0.15, marginKind: 'relative' } : {}) })), question });
    const [answer, counts] = timed(() => answerPlan(basis, choices));
    const [, picture] = timed(() => answerTradeOff(basis, choices, 'brix'));
    const wanted = answer.counts.zones.map(({ visits, counts: samples }, i) => ({ zone: i + 1, visits, counts: samples }));
    const measures = answer.question.measures.map(({ code }) => code);
    const request = { rows: rows as never, table, zoneOfVine, unusable: new Uint8Array(table.count), nearBorder: new Uint8Array(table.count), gateXY: [0, 0] as XY, wanted, measures, secondsAt: secondsAtVine(answer.question), seed: 5 };
    const [, drawAndWalk] = timed(() => drawPlan(request));
    return { counts, picture, drawAndWalk, vines: table.count, visits: answer.counts.visits };
  }));
}

function basisOf(zoneOfVine: Uint8Array): PlanBasis {
  const zones = Array.from({ length: zoneCount }, (_, i) => {
    const vines = zoneOfVine.filter((zone) => zone === i + 1).length;
    return { id: '', number: i + 1, name: '', colour: null, vines, eligible: Math.round(vines * 0.9) };
  });
  const measures = codes.map((code) => {
    const { unit, decimals, margin, marginKind, secondsPerSample, skewed, where, defaultSpread, typicalMean } = catalogue.find((one) => one.code === code)!;
    const spreads = zones.map((_, i) => ({ kind: defaultSpread.kind, value: defaultSpread.value * (0.8 + i / 10), cautious: defaultSpread.value, source: 'trade' as const, n: 0, seasons: [], df: null, outliers: 0, withOutliers: null, withoutOutliers: null, expectedMean: typicalMean, isMeanAssumed: true }));
    return { code, name: '', unit, decimals, margin, marginKind, confidence: 0.95 as const, secondsPerSample, skewed, measuredIn: where, sampledUnit: 'vine', rowSide: 'either' as const, tradeSource: defaultSpread.source, spreads, pilots: zones.map(() => null) };
  });
  return { zoningId: '', zoningNumber: 1, blockId: '', blockName: '', seasonId: '', seasonName: '', zones, measures, pilot: null, walks: [], isWalkLaid: false, settings: { floorVines: 5, impracticalSamples: 60, dayHours: 8, costPerHour: 20, currency: 'EUR' } };
}

function timed<Result>(work: () => Result): [Result, number] {
  const start = process.cpuUsage();
  const result = work();
  const { user, system } = process.cpuUsage(start);
  return [result, (user + system) / 1000];
}
