import { randomUUID } from 'node:crypto';
import { randomIndex, randomNormal, seededRandom, type Random } from '../../shared/analysis/random.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { isBearing } from '../ground/blockVines.ts';
import { fromGeoJson } from '../models/geometry.ts';
import { Reading } from '../models/Reading.ts';
import type { DemoDays } from './demoDays.ts';
import type { DemoPlace } from './demoPlace.ts';
import type { Ground } from './ground.ts';
import { frameOf } from './layerFiles.ts';
import type { LaidBlock } from './seedBlocks.ts';
import type { DemoEstate } from './seedEstate.ts';

interface Visit {
  yearsAgo: number;
  /** Days from today. */
  offset: number;
  measures: readonly string[];
  vines: number;
}

const year = 365;

/** Three seasons of visits: a lag-phase count, and ripening in this and earlier years. */
const visits: readonly Visit[] = [
  ...[2, 1].flatMap((yearsAgo): Visit[] => [
    { yearsAgo, offset: -52 - yearsAgo * year, measures: ['clusterCount'], vines: 36 },
    ...[-20, -10, 2].map((offset): Visit => ({ yearsAgo, offset: offset - yearsAgo * year, measures: ['brix', 'ph', 'ta'], vines: 24 })),
    { yearsAgo, offset: 14 - yearsAgo * year, measures: ['clusterWeight'], vines: 30 },
  ]),
  { yearsAgo: 0, offset: -52, measures: ['clusterCount'], vines: 42 },
  { yearsAgo: 0, offset: -50, measures: ['clusterWeight'], vines: 36 },
  ...[-22, -15].map((offset): Visit => ({ yearsAgo: 0, offset, measures: ['brix', 'ph', 'ta'], vines: 30 })),
  ...[-8, -1].map((offset): Visit => ({ yearsAgo: 0, offset, measures: ['brix', 'ph', 'ta', 'berryWeight'], vines: 30 })),
];

/** The visit after the wet spell: some of the fruit was still wet. */
const wetVisit = -8;

const units: Record<string, string> = { brix: '°Brix', ph: 'pH', ta: 'g/L', clusterCount: 'clusters', clusterWeight: 'g', berryWeight: 'g' };

/** Readings on single vines, drawn from what the ground gives them; shallow soil ripens earlier and bears less. */
export async function seedFruit(made: DemoEstate, laid: readonly LaidBlock[], options: { ground: Ground; days: DemoDays }): Promise<void> {
  const crew = made.personOf('crew');
  const lab = made.personOf('lab');
  for (const [index, block] of laid.entries()) {
    const vigour = options.ground.vigour(block.demo);
    const random = seededRandom(700 + index);
    const rows = visits.flatMap((visit) =>
      drawVines(block, options.ground.place, { count: visit.vines, random }).flatMap(({ vine, x, y, position }) =>
        visit.measures.map((measureCode) => ({
          id: randomUUID(),
          estateId: made.estateId,
          seasonId: made.seasons[visit.yearsAgo]!.id,
          blockId: block.ground.block.id,
          rowId: block.ground.stored[block.ground.vines.row[vine]!]!.id,
          ordinal: block.ground.vines.ordinal[vine]!,
          position: fromGeoJson(position) as never,
          measureCode,
          value: valueOf(measureCode, { block, visit, vigour: vigour(x, y), random }),
          unit: units[measureCode]!,
          takenAt: options.days.at(visit.offset, 7 + random() * 3),
          receivedAt: options.days.at(visit.offset, 16),
          personId: measureCode.startsWith('cluster') ? crew : lab,
          source: 'demo' as const,
          state: 'checked' as const,
          flags: (visit.offset === wetVisit && index === 0 && measureCode === 'brix' && random() < 0.4 ? ['wetFruit'] : []) as never,
        })),
      ),
    );
    for (let from = 0; from < rows.length; from += 500) await Reading.query().insert(rows.slice(from, from + 500));
  }
}

function drawVines({ ground }: LaidBlock, place: DemoPlace, { count, random }: { count: number; random: Random }) {
  const { anchor } = frameOf(place);
  const chosen = new Set<number>();
  while (chosen.size < count) {
    const vine = randomIndex(random, ground.vines.count);
    const row = ground.vines.row[vine]!;
    if (isBearing(ground.states[vine]!) && row > 0 && row < ground.stored.length - 1) chosen.add(vine);
  }
  return [...chosen].map((vine) => {
    const [x, y] = [ground.vines.x[vine]!, ground.vines.y[vine]!];
    return { vine, x: x - anchor[0], y: y - anchor[1], position: { type: 'Point' as const, coordinates: [...fromUtm([x, y], ground.block.epsg)] } };
  });
}

interface Circumstances {
  block: LaidBlock;
  visit: Visit;
  vigour: number;
  random: Random;
}

function valueOf(measureCode: string, { block, visit, vigour, random }: Circumstances): number {
  const { demo } = block;
  const day = visit.offset + visit.yearsAgo * year;
  const vintage = [0, -0.6, 0.5][visit.yearsAgo]!;
  const rich = vigour - 0.5;
  const noise = (sd: number) => sd * randomNormal(random);
  switch (measureCode) {
    case 'brix':
      return round(demo.brix + vintage + demo.brixPerDay * (day + 18) - 3.4 * rich + noise(0.95), 1);
    case 'ph':
      return round(3.32 + 0.011 * (day + 8) + 0.04 * vintage - 0.22 * rich + noise(0.08), 2);
    case 'ta':
      return round(Math.max(3, 7.2 - 0.085 * (day + 8) - 0.3 * vintage + 2.1 * rich + noise(0.65)), 1);
    case 'berryWeight':
      // Berries lose a little water in the last weeks.
      return round(Math.max(0.4, 1.42 + 0.3 * rich - 0.006 * (day + 8) + noise(0.11)), 2);
    case 'clusterCount':
      return Math.max(2, Math.round(demo.clusters * (1 + 0.5 * rich) * (1 + 0.05 * vintage) * (1 + noise(0.22))));
    default: {
      // At lag phase a cluster has about half of its weight at harvest.
      const grown = day < 0 ? 0.5 : 1;
      return Math.max(15, Math.round(demo.clusterG * grown * (1 + 0.55 * rich) * Math.exp(noise(0.32) - 0.05)));
    }
  }
}

const round = (value: number, decimals: number) => Number(value.toFixed(decimals));
