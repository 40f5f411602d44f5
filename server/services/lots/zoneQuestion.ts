import { lotLikeness } from '../../../shared/cellar/lotLikeness.ts';
import { weighedYield } from '../../../shared/cellar/weighedYield.ts';
import { zonesCompared, zoneVerdict, type ZoneMean } from '../../../shared/cellar/zonesMattered.ts';
import type { ReviewView } from '../../../shared/contracts/tickets.ts';
import { ADVISED_MINIMUM, sampleSize } from '../../../shared/sampling/sampleSize.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { visitMean, type VisitMean } from '../../ground/visitMean.ts';
import { zonedReadings, type ZonedReading } from '../../ground/zonedReadings.ts';
import { Season } from '../../models/Season.ts';
import type { BoardBlock, BoardGround } from './boardGround.ts';
import { weighedOf, type WeighedLoad } from './weighedZones.ts';
import { boardConfidence } from './zoneOutlook.ts';

type Compared = ReviewView['blocks'][number]['measures'][number];
const fruit = ['brix', 'ph', 'ta'] as const;
/** Sugar, pH, acidity and tonnes. */
const asked = fruit.length + 1;

/** Did the zones of a block matter, beside one block as a whole: by measure, with the hours that knowing it took. `tickets`: those that count. */
export async function zoneQuestion(estateId: string, ground: BoardGround, { block, tickets }: { block: BoardBlock; tickets: readonly WeighedLoad[] }): Promise<Omit<ReviewView['blocks'][number], 'errorParts'>> {
  const measures = [...fruit.flatMap((code) => compareFruit(ground, block, code) ?? []), ...compareYields(ground, block, tickets)];
  const thisSeason = judged(measures);
  const lastSeason = thisSeason === false ? await judgedBefore(estateId, ground, block) : null;
  const taken = block.readings.filter(({ zone, excludedReason }) => zone > 0 && excludedReason === null);
  const seconds = taken.reduce((sum, { measureCode }) => sum + (ground.measures.find(({ code }) => code === measureCode)?.secondsPerSample ?? 0), 0);
  return {
    blockId: block.ground.block.id, blockName: block.ground.block.name, zones: block.zones.length, measures, lastSeason, oneLot: wentIntoOneLot(ground, block),
    readings: taken.length, hours: seconds / 3600, sugar: sugarReadings(ground, block), verdict: zoneVerdict({ zones: block.zones.length, thisSeason, lastSeason }),
  };
}

/** True when every vine of the zones was picked into the same lot. */
function wentIntoOneLot({ lots }: BoardGround, { zoneOf, lotOf }: BoardBlock): boolean {
  const holders = [...new Set([...lotOf].filter((_, vine) => zoneOf[vine]! > 0))];
  return holders.length === 1 && lots[holders[0]!]?.state === 'picked';
}

/** Readings of sugar on the newest visit, and how many its margin would have taken; null while it was not read. */
function sugarReadings({ measures }: BoardGround, { outlooks }: BoardBlock): { taken: number; needed: number } | null {
  const measure = measures.find(({ code }) => code === 'brix');
  const means = outlooks.flatMap(({ latest, bearing }) => (latest.brix === null || !(latest.brix.sd > 0) ? [] : [{ ...latest.brix, bearing }]));
  if (!measure || measure.marginKind !== 'absolute' || means.length < outlooks.length || means.length === 0) return null;
  const needed = means.map(({ sd, n, bearing }) => sampleSize({ spread: sd, margin: measure.margin, confidence: measure.confidence, populationSize: Math.max(bearing, n), minimum: ADVISED_MINIMUM }).n);
  return { taken: means.reduce((sum, { n }) => sum + n, 0), needed: needed.reduce((sum, n) => sum + n, 0) };
}

function judged(measures: readonly Compared[]): boolean | null {
  const told = measures.flatMap(({ differ }) => (differ === null ? [] : [differ]));
  return told.length === 0 ? null : told.includes(true);
}

function compareFruit({ measures }: BoardGround, { zones, outlooks }: BoardBlock, code: (typeof fruit)[number]): Compared | null {
  const unit = measures.find((measure) => measure.code === code)?.unit ?? '';
  return compareMeans(outlooks.flatMap(({ zone, latest, tonnes }) => (latest[code] === null ? [] : [{ zone, mean: latest[code], weight: tonnes.value }])), { code, unit, zones: zones.length });
}

/** Over zones read on the newest day; null unless all of them were. */
function compareMeans(means: readonly { zone: number; mean: VisitMean; weight: number }[], about: { code: string; unit: string; zones: number }): Compared | null {
  const on = means.map(({ mean }) => mean.visit).sort().at(-1);
  const same = means.filter(({ mean }) => mean.visit === on && mean.n >= 2);
  if (on === undefined || same.length < 2 || same.length < about.zones) return null;
  const { detectable: _detectable, ...found } = zonesCompared(same.map(({ zone, mean }) => ({ zone, n: mean.n, sd: mean.sd, estimate: mean.estimate })), { confidence: boardConfidence, asked });
  const values = same.map(({ mean }) => mean.mean);
  const weighted = same.filter(({ weight }) => weight > 0);
  const betweenShare = weighted.length < 2 ? null : lotLikeness(weighted.map(({ zone, mean, weight }) => ({ zone: String(zone), weight, mean: mean.estimate, sd: mean.sd }))).betweenShare;
  return { measure: about.code, basis: 'readings', unit: about.unit, on, n: same.reduce((sum, { mean }) => sum + mean.n, 0), least: Math.min(...values), most: Math.max(...values), betweenShare, ...found };
}

/** By the scale where it had every zone; as expected besides where it was not asked, or had the zones together. */
function compareYields(ground: BoardGround, block: BoardBlock, tickets: readonly WeighedLoad[]): Compared[] {
  const weighed = compareWeighed(ground, block, tickets);
  const expected = weighed === null || weighed.basis === 'shared' ? compareExpected(block) : null;
  return [weighed, expected].flatMap((found) => found ?? []);
}

/** Tonnes a hectare as weighed; null unless every zone was. A load shared out by rows or expectation says nothing of how zones differ. */
function compareWeighed(ground: BoardGround, block: BoardBlock, tickets: readonly WeighedLoad[]): Compared | null {
  const found = block.zones.flatMap((_, at) => weighedOf(ground, tickets, { block, at }) ?? []);
  if (found.length < 2 || found.length < block.zones.length) return null;
  const basis = found.some(({ by }) => by === 'shared') ? 'shared' : found.some(({ by }) => by === 'bins') ? 'bins' : 'weighed';
  const means = found.map(({ kg, share, bins }, at) => ({ zone: block.zones[at]!.number, n: 0, sd: Number.NaN, estimate: weighedYield({ kg, areaHa: (share * block.zones[at]!.areaM2) / 10_000, vines: share * block.outlooks[at]!.bearing, bins }) }));
  return yieldLine(means, basis);
}

/** Tonnes a hectare as expected. Growth and losses are the same for all zones of a block and drop out of their difference. */
function compareExpected({ zones, outlooks }: BoardBlock): Compared | null {
  const means = outlooks.flatMap((outlook, at) => {
    const { areaM2 } = zones[at]!;
    const own = ['clusters', 'clusterWeight'].map((name) => outlook.parts.find(({ part }) => part === name)!);
    if (own.some(({ kind }) => kind !== 'measured') || outlook.yield.tonnes <= 0) return [];
    const value = outlook.yield.tonnes / (areaM2 / 10_000);
    const total = outlook.yield.relativeError ** 2;
    const share = own.reduce((sum, one) => sum + one.share, 0);
    const n = Math.min(...own.map((one) => one.n ?? 0));
    return [{ zone: outlook.zone, n, sd: Number.NaN, estimate: { value, standardError: value * Math.sqrt(total * share), df: Math.max(1, n - 1) } }];
  });
  return means.length < 2 || means.length < zones.length ? null : yieldLine(means, 'expected');
}

function yieldLine(means: readonly ZoneMean[], basis: Exclude<Compared['basis'], 'readings'>): Compared {
  const found = zonesCompared(means, { confidence: boardConfidence, asked });
  const values = means.map(({ estimate }) => estimate.value);
  const halfWidth = basis === 'shared' ? null : found.halfWidth;
  return {
    measure: 'yield', basis, unit: 't/ha', on: null, n: null, lowest: found.lowest, highest: found.highest, least: Math.min(...values), most: Math.max(...values),
    difference: found.difference, halfWidth, p: null, differ: halfWidth === null ? null : found.difference > halfWidth, betweenShare: null,
  };
}

/** Whether the zones as they are today would have differed in the season before; null when it was not read so. */
async function judgedBefore(estateId: string, ground: BoardGround, block: BoardBlock): Promise<boolean | null> {
  const before = await Season.query().where({ estateId }).where('startsOn', '<', ground.season.startsOn).orderBy('startsOn', 'desc').first();
  if (!before) return null;
  const readings = (await zonedReadings(estateId, { ground: block.ground, zoneOf: block.zoneOf, seasonId: before.id })).filter(({ excludedReason, zone }) => excludedReason === null && zone > 0);
  return judged(
    fruit.flatMap(
      (code) =>
        compareMeans(
          newestMeans(
            readings.filter(({ measureCode }) => measureCode === code),
            { block, decimals: ground.measures.find((measure) => measure.code === code)?.decimals ?? 1 },
          ),
          { code, unit: '', zones: block.zones.length },
        ) ?? [],
    ),
  );
}

function newestMeans(readings: readonly ZonedReading[], { block, decimals }: { block: BoardBlock; decimals: number }): { zone: number; mean: VisitMean; weight: number }[] {
  const last = readings.map(({ visit }) => visit).sort().at(-1);
  const groups = groupBy(readings.filter(({ visit }) => visit === last), ({ zone }) => zone);
  return [...groups].map(([zone, own]) => ({ zone, mean: visitMean(own, { bearing: block.outlooks.find((outlook) => outlook.zone === zone)?.bearing ?? 0, decimals }), weight: 1 }));
}
