import type { TransactionOrKnex } from 'objection';
import type { VineState } from '../../shared/contracts/rows.ts';
import { EstateModel } from './BaseModel.ts';

/** A vine of which something is known; all others follow from their row. */
export class Vine extends EstateModel {
  static override tableName = 'vines';

  declare blockId: string;
  declare rowId: string;
  declare ordinal: number;
  declare state: VineState;
  declare proposed: boolean;
  declare notedBy: string | null;
  declare notedAt: Date;
}

export interface VineRecord {
  rowId: string;
  ordinal: number;
  state: VineState;
  proposed: boolean;
  notedBy: string | null;
  notedAt: Date;
}

/**
 * Writes marks in one statement. A mark that is only proposed never replaces one that stands.
 * Returns how many were written.
 */
export async function writeVines(trx: TransactionOrKnex, where: { estateId: string; blockId: string }, marks: readonly VineRecord[]): Promise<number> {
  if (marks.length === 0) return 0;
  const written = (await trx.raw(
    `insert into vines (estate_id, block_id, row_id, ordinal, state, proposed, noted_by, noted_at)
     select ?, ?, x."rowId", x."ordinal", x."state", x."proposed", x."notedBy", x."notedAt"
     from jsonb_to_recordset(?::jsonb) as x("rowId" uuid, "ordinal" int, "state" text, "proposed" boolean, "notedBy" uuid, "notedAt" timestamptz)
     on conflict (estate_id, row_id, ordinal) do update set state = excluded.state, proposed = excluded.proposed, noted_by = excluded.noted_by, noted_at = excluded.noted_at
     where vines.proposed or not excluded.proposed`,
    [where.estateId, where.blockId, JSON.stringify(marks)],
  )) as { rowCount: number };
  return written.rowCount;
}

/** Takes marks away; with `proposedOnly` those that stand are left. Returns how many went. */
export async function eraseVines(trx: TransactionOrKnex, where: { estateId: string; blockId: string }, places: readonly { rowId: string; ordinal: number }[], options: { proposedOnly: boolean }): Promise<number> {
  if (places.length === 0) return 0;
  const erased = (await trx.raw(
    `delete from vines v using jsonb_to_recordset(?::jsonb) as x("rowId" uuid, "ordinal" int)
     where v.estate_id = ? and v.block_id = ? and v.row_id = x."rowId" and v.ordinal = x."ordinal" and (v.proposed or not ?)`,
    [JSON.stringify(places), where.estateId, where.blockId, options.proposedOnly],
  )) as { rowCount: number };
  return erased.rowCount;
}
