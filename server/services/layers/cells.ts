import { defineGrid } from '../../../shared/analysis/grid.ts';
import type { CellsGrid, ReliefView } from '../../../shared/contracts/layers.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import type { Access } from '../../access/access.ts';
import { Clash } from '../../errors.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { Layer } from '../../models/Layer.ts';
import { Relief } from '../../models/Relief.ts';
import { findBlock } from '../blocks/view.ts';
import { say } from '../../sentences/say.ts';

/** Cells of a layer on a block as they are stored, with the grid they lie on. */
export async function readCells(access: Access, layerId: string, blockId: string): Promise<{ bytes: Buffer; grid: CellsGrid }> {
  const layer = await Layer.query().findOne({ estateId: access.estateId, id: layerId }).whereNull('retiredAt').throwIfNotFound();
  const block = await findBlock(access, blockId);
  const here = await BlockLayer.query().findOne({ estateId: access.estateId, layerId, blockId }).throwIfNotFound();
  const { key, epsg, x0, y0, cellSizeM, cols, rows } = defineGrid(block.boundary.coordinates as unknown as MultiPolygonLonLat, block.cellSizeM);
  if (here.gridKey !== key) throw new Clash('layerStale', say('layerComesAgain', { layer: layer.name, block: block.name }));
  return { bytes: here.cells, grid: { key, epsg, x0, y0, cellSizeM, cols, rows, cornersLonLat: cornersOf({ epsg, x0, y0, cellSizeM, cols, rows }) } };
}

/** Where the findings about a layer hold on a block: a byte a cell as cells are stored; null where none has a place of its own. */
export async function readMarks(access: Access, layerId: string, blockId: string): Promise<Buffer | null> {
  await Layer.query().findOne({ estateId: access.estateId, id: layerId }).whereNull('retiredAt').throwIfNotFound();
  const here = await BlockLayer.query().findOne({ estateId: access.estateId, layerId, blockId }).select('marks').throwIfNotFound();
  return here.marks;
}

/** The lie of the land round all blocks; null where no elevations were ever brought in. */
export async function readRelief(access: Access): Promise<ReliefView | null> {
  const relief = await Relief.query().findById(access.estateId);
  if (!relief) return null;
  const { cellSizeM, cols, rows, cells } = relief;
  return { cellSizeM, columns: cols, rows, cornersLonLat: cornersOf(relief), cells: cells.toString('base64') };
}

function cornersOf({ epsg, x0, y0, cellSizeM, cols, rows }: Omit<CellsGrid, 'key' | 'cornersLonLat'>): CellsGrid['cornersLonLat'] {
  const corner = (col: number, row: number): [number, number] => {
    const [lon, lat] = fromUtm([x0 + col * cellSizeM, y0 - row * cellSizeM], epsg);
    return [lon, lat];
  };
  return [corner(0, 0), corner(cols, 0), corner(cols, rows), corner(0, rows)];
}
