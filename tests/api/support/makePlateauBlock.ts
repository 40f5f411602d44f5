import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import { cellCentre } from '../../../shared/analysis/grid.ts';
import { seededRandom } from '../../../shared/analysis/random.ts';
import { newBlock } from '../../../shared/contracts/blocks.ts';
import { gridOf, loadBlockVines, type BlockVines } from '../../../server/ground/blockVines.ts';
import { BlockLayer } from '../../../server/models/BlockLayer.ts';
import { Job } from '../../../server/models/Job.ts';
import { Layer } from '../../../server/models/Layer.ts';
import { createBlock } from '../../../server/services/blocks/change.ts';
import { zoningJob } from '../../../server/services/zonings/runZoning.ts';
import { outline, place } from './shapes.ts';

export interface PlateauBlock {
  blockId: string;
  layerId: string;
  ground: BlockVines;
}

/** A block of four corners, none of them square, with a vigour layer of two plateaus, about 0.4 in the west and 0.7 in the east of a winding border. */
export async function makePlateauBlock(owner: { estateId: string; personId: string }, over: { name?: string; x?: number; cellSizeM?: number } = {}): Promise<PlateauBlock> {
  const { name = 'Côte à l’Éperon', x = 0 } = over;
  const boundary = outline([[x, 0], [x + 150, 7], [x + 161, 104], [x + 5, 98]]);
  const { id: blockId } = await createBlock({ ...owner, roles: ['owner'] }, newBlock.parse({ name, boundary, rowSpacingM: 2.5, vineSpacingM: 1.2, ...(over.cellSizeM === undefined ? {} : { cellSizeM: over.cellSizeM }) }), new Date('2026-06-01'));
  const ground = await loadBlockVines(owner.estateId, blockId);
  const grid = gridOf(ground);
  const random = seededRandom(7);
  const cells = Float32Array.from(grid.inside, (inside, cell) => {
    if (inside === 0) return Number.NaN;
    const [u, v] = [cellCentre(grid, cell)[0] - place.x - x, cellCentre(grid, cell)[1] - place.y];
    const plateau = u < 75 + 18 * Math.sin(v / 18) ? 0.4 : 0.7;
    return plateau + 0.03 * Math.sin(u / 11) * Math.cos(v / 13) + 0.02 * (random() - 0.5);
  });
  const layer = await Layer.query().insert({ estateId: owner.estateId, type: 'vigour', name: 'Flight of June', unit: '', measuredOn: '2026-06-20', createdBy: owner.personId });
  const statistics = { n: grid.inside.reduce((sum, inside) => sum + inside, 0), missing: 0, mean: 0.55, sd: 0.15, min: 0.39, max: 0.71, quantiles: [], histogram: null, classes: null };
  await BlockLayer.query().insert({ estateId: owner.estateId, layerId: layer.id, blockId, gridKey: grid.key, cells: Buffer.from(encodeCells(cells)), coverage: 1, statistics, findings: [] });
  return { blockId, layerId: layer.id, ground };
}

/** Does a zoning's job in this process, as the runner would. */
export async function workOnZoning(jobId: string): Promise<void> {
  const job = await Job.query().patchAndFetchById(jobId, { state: 'running' });
  await zoningJob.work({ job, report: () => Promise.resolve() });
  await job.$query().patch({ state: 'done' });
}
