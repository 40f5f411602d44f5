import type { LonLat } from '../geo/coordinates.ts';
import { fromUtm, toUtm } from '../geo/utm.ts';
import { vineLabel } from '../geo/numbering.ts';
import { vineIndex } from '../geo/vines.ts';
import { NearestPoints } from '../geo/vinesNearest.ts';
import type { EarlierBlock, EarlierPlace } from './earlierTable.ts';

/** A vine of a block by its index in the block's vine table. */
export function placeOf(block: EarlierBlock, vine: number, metres: number | null): EarlierPlace {
  const row = block.vines.row[vine]!;
  const ordinal = block.vines.ordinal[vine]!;
  const { rowId, label } = block.named[row]!;
  return { blockId: block.id, rowId, rowLabel: label, ordinal, vineNumber: vineLabel(block.rows[row]!, ordinal, block.vineOneEnd), ...(block.withoutRows ? { place: fromUtm([block.vines.x[vine]!, block.vines.y[vine]!], block.epsg) } : {}), metres };
}

/** Metres from a position to a vine that was found. */
export function distanceTo(block: EarlierBlock, { rowId, ordinal }: EarlierPlace, position: LonLat): number {
  const vine = vineIndex(block.vines, block.named.findIndex((row) => row.rowId === rowId), ordinal);
  const [x, y] = toUtm(position, block.epsg);
  return Math.hypot(block.vines.x[vine]! - x, block.vines.y[vine]! - y);
}

interface Searched {
  readonly block: EarlierBlock;
  readonly nearest: NearestPoints;
}

/** Nearest vine over all blocks of an estate. */
export class NearestVine {
  readonly #blocks: readonly Searched[];

  constructor(blocks: readonly EarlierBlock[]) {
    this.#blocks = blocks.filter(({ vines }) => vines.count > 0).map((block) => ({ block, nearest: new NearestPoints(block.vines.x, block.vines.y) }));
  }

  /** The vine and its distance in metres; null where no block has vines. */
  find(position: LonLat): { block: EarlierBlock; vine: number; metres: number } | null {
    let best: { block: EarlierBlock; vine: number; metres: number } | null = null;
    for (const { block, nearest } of this.#blocks) {
      const [x, y] = toUtm(position, block.epsg);
      const vine = nearest.nearest(x, y);
      const metres = Math.hypot(block.vines.x[vine]! - x, block.vines.y[vine]! - y);
      if (Number.isFinite(metres) && (best === null || metres < best.metres)) best = { block, vine, metres };
    }
    return best;
  }
}
