import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import type { BlockLayer } from '../../models/BlockLayer.ts';
import type { PlacedCells } from '../../placing/placed.ts';

/** Placed cells as they are stored. */
export function blockLayer(estateId: string, layerId: string, { blockId, gridKey, cells, coverage, statistics, findings, marks, survey }: PlacedCells): Partial<BlockLayer> {
  return { estateId, layerId, blockId, gridKey, cells: Buffer.from(encodeCells(cells)), coverage, statistics, findings, marks: marks === null ? null : Buffer.from(encodeCells(marks)), survey: survey ?? null };
}
