import { newBlock } from '../../shared/contracts/blocks.ts';
import { randomIndex, seededRandom } from '../../shared/analysis/random.ts';
import { loadBlockVines, type BlockVines } from '../ground/blockVines.ts';
import { createBlock } from '../services/blocks/change.ts';
import { VineHistory } from '../models/VineHistory.ts';
import { changeCensus } from '../services/blocks/census.ts';
import type { DemoPlace } from './demoPlace.ts';
import { outlineLonLat } from './layerFiles.ts';
import { blocks, type DemoBlock } from './marlhaven.ts';
import type { DemoEstate } from './seedEstate.ts';

export interface LaidBlock {
  demo: DemoBlock;
  ground: BlockVines;
}

/** Blocks with rows and a census made in winter: two to four percent of the places are empty, replanted or of another variety. */
export async function seedBlocks(made: DemoEstate, place: DemoPlace, { now, countedAt }: { now: Date; countedAt: Date }): Promise<LaidBlock[]> {
  const access = { estateId: made.estateId, personId: made.personOf('agronomist'), roles: ['agronomist' as const, 'manager' as const] };
  const laid: LaidBlock[] = [];
  for (const [index, demo] of blocks.entries()) {
    const { name, variety, rootstock, plantedYear, rowBearingDeg, rowSpacingM, vineSpacingM, headlandM } = demo;
    const input = newBlock.parse({ name, variety, rootstock, plantedYear, rowBearingDeg, rowSpacingM, vineSpacingM, headlandM, startPostColour: demo.startPost, endPostColour: demo.endPost, trellis: 'Two wires, steel posts', boundary: { type: 'Polygon', coordinates: [outlineLonLat(demo, place)] } });
    const block = await createBlock(access, input, now);
    const ground = await loadBlockVines(made.estateId, block.id);
    await changeCensus(access, block.id, { marks: censusMarks(ground, index + 11), complete: demo.key !== 'marl' }, countedAt);
    laid.push({ demo, ground: await loadBlockVines(made.estateId, block.id) });
  }
  await VineHistory.query().where({ estateId: made.estateId }).patch({ at: countedAt });
  return laid;
}

function censusMarks(ground: BlockVines, seed: number): { rowId: string; ordinal: number; state: 'missing' | 'replant' | 'offType' | 'dead' }[] {
  const random = seededRandom(seed);
  const states = ['missing', 'missing', 'missing', 'replant', 'dead', 'offType'] as const;
  const chosen = new Set<number>();
  while (chosen.size < Math.round(ground.vines.count * 0.028)) chosen.add(randomIndex(random, ground.vines.count));
  return [...chosen].map((vine) => ({ rowId: ground.stored[ground.vines.row[vine]!]!.id, ordinal: ground.vines.ordinal[vine]!, state: states[randomIndex(random, states.length)]! }));
}
