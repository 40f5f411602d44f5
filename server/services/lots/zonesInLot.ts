import { loadBlockVines, zonesOfVines } from '../../ground/blockVines.ts';
import { vineIndex } from '../../../shared/geo/vines.ts';
import type { Lot } from '../../models/Lot.ts';
import { Zoning } from '../../models/Zoning.ts';
import { LotPart } from '../../models/LotPart.ts';
import { runsOf } from './boardGround.ts';

/** A block with vines in a lot. */
export interface LotGround {
  readonly blockId: string;
  readonly blockName: string;
  /** Today's zones that these vines stand in, rising. */
  readonly numbers: readonly number[];
}

/** Blocks of a lot and the zones of today that its vines stand in: a zone published since the lot was made counts, one that went does not. */
export async function zonesInLot(lot: Pick<Lot, 'id' | 'estateId' | 'scenarioId' | 'seasonId'>): Promise<LotGround[]> {
  const { estateId, scenarioId, seasonId } = lot;
  const parts = await LotPart.query().where({ estateId, lotId: lot.id }).distinct('blockId');
  const runs = (await runsOf(estateId, scenarioId)).filter(({ lotId }) => lotId === lot.id);
  const found: LotGround[] = [];
  for (const { blockId } of parts) {
    const ground = await loadBlockVines(estateId, blockId);
    const zoning = await Zoning.query().findOne({ estateId, seasonId, blockId, state: 'live' });
    const zoneOf = zoning && zonesOfVines(ground, zoning);
    const numbers = new Set<number>();
    for (const { rowId, from, to } of runs) {
      const row = ground.rowIndexOf.get(rowId);
      if (row === undefined) continue;
      for (let ordinal = from; ordinal <= to; ordinal++) {
        const vine = vineIndex(ground.vines, row, ordinal);
        if (vine >= 0) numbers.add(zoneOf?.[vine] ?? 0);
      }
    }
    if (numbers.size > 0) found.push({ blockId, blockName: ground.block.name, numbers: [...numbers].filter((number) => number > 0).sort((a, b) => a - b) });
  }
  return found.sort((a, b) => a.blockName.localeCompare(b.blockName, undefined, { numeric: true }));
}
