import { decodeFloatCells } from '../../../shared/analysis/cellBytes.ts';
import { cellAt } from '../../../shared/analysis/grid.ts';
import { majorityFiltered } from '../../../shared/analysis/labels.ts';
import { rowRuns } from '../../../shared/analysis/snapToRows.ts';
import { DOUBTFUL_ABOVE } from '../../../shared/analysis/zoningStats.ts';
import type { Zone } from '../../../shared/analysis/zoningTypes.ts';
import type { ZoningDoubt } from '../../../shared/contracts/zonings.ts';
import type { Access } from '../../access/access.ts';
import { gridOf, loadBlockVines } from '../../ground/blockVines.ts';
import { Zoning } from '../../models/Zoning.ts';
import { ZoningCandidate } from '../../models/ZoningCandidate.ts';
import { runCompute } from '../../workers/computePool.ts';
import { requireSameOutline } from './editZones.ts';
import { ownNumber, readLabels } from './view.ts';

const nothing: ZoningDoubt = { vines: 0, doubtful: 0, byZone: [], runs: [], geometry: null };
const [clear, doubtful] = [1, 2];

/** Whether a vine in this cell is counted as doubtful; one outside all cells is not. */
export function isDoubtful(doubt: Float32Array, cell: number): boolean {
  return cell >= 0 && doubt[cell]! > DOUBTFUL_ABOVE;
}

/** Where a zoning is in doubt: vines whose layers fit another zone more than half as well as their own, counted and drawn. */
export async function readDoubt(access: Access, zoningId: string, zoneCount: number | null): Promise<ZoningDoubt> {
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  const count = zoneCount ?? ownNumber(zoning);
  const candidate = await ZoningCandidate.query().findOne({ estateId: access.estateId, zoningId, zoneCount: count });
  if (!candidate?.doubt || count < 2) return nothing;
  const ground = await loadBlockVines(access.estateId, zoning.blockId);
  requireSameOutline(zoning, ground);
  const grid = gridOf(ground);
  const { labels } = await readLabels(access, zoningId, zoneCount);
  const doubt = decodeFloatCells(candidate.doubt);
  const cells = Int32Array.from(ground.vines.x, (x, vine) => cellAt(grid, [x, ground.vines.y[vine]!]));
  const marks = Uint8Array.from(cells, (cell) => (isDoubtful(doubt, cell) ? doubtful : clear));
  const zoneOf = (vine: number) => (cells[vine]! >= 0 ? (labels[cells[vine]!] ?? 0) : 0);
  const all = [...marks.keys()].filter((vine) => marks[vine] === doubtful && zoneOf(vine) > 0);
  // Single cells are left out of the drawing, not of the count: a hatch of specks cannot be read.
  const drawn = majorityFiltered(labels.map((label, cell) => (label === 0 ? 0 : doubt[cell]! > DOUBTFUL_ABOVE ? doubtful : clear)), grid.cols);
  const traced = drawn.includes(doubtful) ? await runCompute<Zone[]>('traceZones', { grid, labels: drawn, doubt, layers: [] }, { lane: 'quick' }) : [];
  const shape = traced.find(({ number }) => number === doubtful)?.polygonsLonLat ?? null;
  return {
    vines: ground.vines.count,
    doubtful: all.length,
    byZone: [...new Set(all.map(zoneOf))].sort((a, b) => a - b).map((zone) => ({ zone, vines: all.filter((vine) => zoneOf(vine) === zone).length })),
    runs: rowRuns(ground.vines, marks).filter(({ label }) => label === doubtful).map(({ rowIndex, fromOrdinal, toOrdinal }) => ({ rowId: ground.stored[rowIndex]!.id, from: fromOrdinal, to: toOrdinal })),
    geometry: shape === null ? null : { type: 'MultiPolygon', coordinates: shape as unknown as NonNullable<ZoningDoubt['geometry']>['coordinates'] },
  };
}
