import type { Transaction } from 'objection';
import { rowRuns } from '../../../shared/analysis/snapToRows.ts';
import { Unusable } from '../../errors.ts';
import { loadBlockVines, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { Zone } from '../../models/Zone.ts';
import { Zoning } from '../../models/Zoning.ts';
import { say } from '../../sentences/say.ts';

/** Vines of a row, both ends included. */
export interface VineRun {
  readonly rowId: string;
  readonly from: number;
  readonly to: number;
}

/** A zone in force with the vines that stand in it; refused when other zones are in force. */
export async function liveZoneRuns(trx: Transaction, estateId: string, zoneId: string): Promise<{ zone: Zone; zoning: Zoning; ground: BlockVines; runs: VineRun[] }> {
  const zone = await Zone.query(trx).findOne({ estateId, id: zoneId }).select('id', 'zoningId', 'number', 'name').throwIfNotFound();
  const zoning = await Zoning.query(trx).findOne({ estateId, id: zone.zoningId }).throwIfNotFound();
  if (zoning.state !== 'live') throw new Unusable('zoneNotLive', say('zoneNotLive', { number: zone.number }));
  const ground = await loadBlockVines(estateId, zoning.blockId, trx);
  const runs = rowRuns(ground.vines, zonesOfVines(ground, zoning))
    .filter((run) => run.label === zone.number)
    .map((run) => ({ rowId: ground.stored[run.rowIndex]!.id, from: run.fromOrdinal, to: run.toOrdinal }));
  return { zone, zoning, ground, runs };
}

/** What a run has in common with others of its row. */
export function commonRuns(run: VineRun, others: readonly VineRun[]): VineRun[] {
  return others
    .filter(({ rowId, from, to }) => rowId === run.rowId && from <= run.to && run.from <= to)
    .map(({ rowId, from, to }) => ({ rowId, from: Math.max(from, run.from), to: Math.min(to, run.to) }))
    .sort((a, b) => a.from - b.from);
}

/** What is left of a run without these parts of it, which lie apart and in order. */
export function remainingRuns({ rowId, from, to }: VineRun, parts: readonly VineRun[]): VineRun[] {
  const starts = [from, ...parts.map((part) => part.to + 1)];
  const ends = [...parts.map((part) => part.from - 1), to];
  return starts.map((start, at) => ({ rowId, from: start, to: ends[at]! })).filter((left) => left.from <= left.to);
}
