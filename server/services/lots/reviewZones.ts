import { scaled, type Dependent } from '../../../shared/cellar/dependent.ts';
import { errorParts, type ErrorPart, type ErrorShare } from '../../../shared/cellar/errorParts.ts';
import { lotTonnes } from '../../../shared/cellar/lots.ts';
import type { ReviewView } from '../../../shared/contracts/tickets.ts';
import type { BlockVines } from '../../ground/blockVines.ts';
import type { BoardBlock, BoardGround } from './boardGround.ts';
import { figureOf, zoneOutlooks, type UsedFactors, type ZoneOutlook } from './zoneOutlook.ts';
import { shareIn, weighedOf, type WeighedLoad } from './weighedZones.ts';

type ReviewedZone = ReviewView['zones'][number];
const shownDates = 4;
const yieldMeasures = ['clusterCount', 'clusterWeight'];

/**
 * Each zone that was weighed, by each day on which its forecast changed, and where the last error came from. What reached
 * the books after the block's first load was weighed is no forecast. `dayOf`: the estate's day of an instant.
 */
export function reviewZones(ground: BoardGround, tickets: readonly WeighedLoad[], { dayOf, knownOn }: { dayOf: (at: Date) => string; knownOn: KnownOn }): { zones: ReviewedZone[]; parts: ErrorShare[]; partsOf: (blockId: string) => ErrorShare[] } {
  const all = ground.blocks.flatMap((block) => {
    const dates = forecastDates(ground, tickets, { block, dayOf });
    return block.zones.flatMap((zone, at) => {
      const weighed = weighedOf(ground, tickets, { block, at });
      if (weighed === null) return [];
      return dates.map((forecastOn) => ({ block, at, weighed, forecastOn, isLast: forecastOn === dates.at(-1), outlook: outlooksOn(ground, block, { day: forecastOn, knownOn })[at]!, number: zone.number }));
    });
  });
  const zones = all.map(({ block, number, weighed, forecastOn, outlook }): ReviewedZone => {
    const forecast = figureOf(scaled(outlook.tonnes, weighed.share), { n: null, kind: 'estimated' });
    const actualT = weighed.kg / 1000;
    return {
      blockId: block.ground.block.id,
      blockName: block.ground.block.name,
      zone: number,
      forecastOn,
      forecast,
      actualT,
      how: weighed.by === 'scale' ? 'measured' : 'shared',
      held: forecast.halfWidth === null ? null : Math.abs(actualT - forecast.value) <= forecast.halfWidth,
    };
  });
  const shares = all
    .filter(({ isLast }) => isLast)
    .map(({ block, at, outlook, weighed }) => ({
      blockId: block.ground.block.id,
      own: errorParts({
        forecastT: outlook.tonnes.value * weighed.share,
        actualT: weighed.kg / 1000,
        ratios: ratiosOf(outlook, block.outlooks[at]!),
      }),
    }));
  return { zones, parts: summed(shares.flatMap(({ own }) => own)), partsOf: (blockId) => summed(shares.filter((one) => one.blockId === blockId).flatMap(({ own }) => own)) };
}

/** When the first load with fruit of the block was weighed; null while none was. */
function firstWeighed({ lots }: BoardGround, tickets: readonly WeighedLoad[], block: BoardBlock): Date | null {
  const own = lots.filter((_, index) => block.zones.some((__, at) => shareIn(block, at, index) > 0)).map(({ id }) => id);
  return tickets.filter(({ lotId }) => own.includes(lotId)).map(({ weighedAt }) => weighedAt).sort((a, b) => a.getTime() - b.getTime())[0] ?? null;
}

/** Days on which clusters were counted or weighed and received, up to the day of the first load: each gave a forecast of its own. */
export function forecastDates(ground: BoardGround, tickets: readonly WeighedLoad[], { block, dayOf }: { block: BoardBlock; dayOf: (at: Date) => string }): string[] {
  const { readings } = block;
  const first = firstWeighed(ground, tickets, block);
  const until = first && dayOf(first);
  const days = new Set(readings.filter(({ measureCode, excludedReason, receivedOn }) => yieldMeasures.includes(measureCode) && excludedReason === null && (until === null || receivedOn <= until)).map(({ receivedOn }) => receivedOn));
  return [...days].sort().slice(-shownDates);
}

/** The vine census and the factors in use at the end of a day: a forecast is judged by what could be known of it. */
export type KnownOn = (block: BoardBlock, day: string) => { census: BlockVines; factors: UsedFactors };

function outlooksOn(ground: BoardGround, block: BoardBlock, { day, knownOn }: { day: string; knownOn: KnownOn }): ZoneOutlook[] {
  const readings = block.readings.filter(({ receivedOn }) => receivedOn <= day);
  const { census, factors } = knownOn(block, day);
  return zoneOutlooks({ ground: census, zoneOf: block.zoneOf, zoneNumbers: block.zones.map(({ number }) => number), readings, measures: ground.measures, season: ground.season, factors });
}

/** Tonnes of a lot by what was known at the end of a day; null for a lot without vines. */
export function lotForecast(ground: BoardGround, lot: number, how: { day: string; knownOn: KnownOn }): Dependent | null {
  const parts = ground.blocks.flatMap((block) => {
    const shares = block.zones.map((_, at) => shareIn(block, at, lot));
    if (shares.every((share) => share === 0)) return [];
    const outlooks = outlooksOn(ground, block, how);
    return shares.flatMap((share, at) => (share === 0 ? [] : [{ tonnes: scaled(outlooks[at]!.tonnes, share) }]));
  });
  return parts.length === 0 ? null : lotTonnes(parts);
}

/**
 * Factors that were found anew after a forecast, as found over as forecast. Clusters weighed at lag phase and again when
 * ripe tell how much they grew; the growth factor takes that part, and the weight of lag phase stands.
 */
function ratiosOf(then: ZoneOutlook, now: ZoneOutlook): Partial<Record<ErrorPart, number>> {
  const part = (outlook: ZoneOutlook, name: string) => outlook.parts.find((one) => one.part === name)!;
  const ratio = (name: string) => part(now, name).value / part(then, name).value;
  const isNew = (name: string) => part(now, name).kind === 'measured' && ratio(name) !== 1;
  const ratios: Partial<Record<ErrorPart, number>> = {};
  if (now.bearing > 0 && then.bearing > 0 && now.bearing !== then.bearing) ratios.vines = now.bearing / then.bearing;
  if (isNew('clusters')) ratios.clusters = ratio('clusters');
  const isRipe = then.beforeVeraison && !now.beforeVeraison;
  if (isRipe) ratios.growth = ratio('clusterWeight') / part(then, 'growth').value;
  else if (isNew('clusterWeight')) ratios.clusterWeight = ratio('clusterWeight');
  if (!isRipe && ratio('growth') !== 1) ratios.growth = ratio('growth');
  if (part(now, 'losses').value !== part(then, 'losses').value) ratios.losses = (1 - part(now, 'losses').value) / (1 - part(then, 'losses').value);
  return ratios;
}

function summed(shares: readonly ErrorShare[]): ErrorShare[] {
  const totals = new Map<ErrorShare['part'], number>();
  for (const { part, tonnes } of shares) totals.set(part, (totals.get(part) ?? 0) + tonnes);
  return [...totals].map(([part, tonnes]) => ({ part, tonnes })).sort((a, b) => Math.abs(b.tonnes) - Math.abs(a.tonnes));
}

