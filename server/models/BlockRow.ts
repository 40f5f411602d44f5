import type { TransactionOrKnex } from 'objection';
import type { RowPiece } from '../../shared/contracts/rows.ts';
import { EstateModel } from './BaseModel.ts';

export class BlockRow extends EstateModel {
  static override tableName = 'block_rows';
  static override jsonAttributes = ['pieces'];

  declare blockId: string;
  declare ordinal: number;
  declare label: string;
  declare labelWas: string | null;
  declare pieces: RowPiece[];
  declare vineCount: number;
  declare retiredAt: Date | null;
}

export interface RowRecord {
  id: string;
  ordinal: number;
  label: string;
  labelWas: string | null;
  pieces: readonly { from: readonly number[]; to: readonly number[]; bends: readonly (readonly number[])[] }[];
  vineCount: number;
}

/** Writes the rows of a block, new ones and changed ones alike, in one statement. */
export async function writeBlockRows(trx: TransactionOrKnex, where: { estateId: string; blockId: string }, rows: readonly RowRecord[]): Promise<void> {
  if (rows.length === 0) return;
  const records = rows.map(({ pieces, ...row }) => ({
    ...row,
    pieces,
    line: { type: 'MultiLineString', coordinates: pieces.map((piece) => [piece.from, ...piece.bends, piece.to]) },
  }));
  await trx.raw(
    `insert into block_rows (id, estate_id, block_id, ordinal, label, label_was, pieces, vine_count, line)
     select x."id", ?, ?, x."ordinal", x."label", x."labelWas", x."pieces", x."vineCount", ST_SetSRID(ST_GeomFromGeoJSON(x."line"::text), 4326)
     from jsonb_to_recordset(?::jsonb) as x("id" uuid, "ordinal" int, "label" text, "labelWas" text, "pieces" jsonb, "vineCount" int, "line" jsonb)
     on conflict (id) do update set ordinal = excluded.ordinal, label = excluded.label, label_was = excluded.label_was, pieces = excluded.pieces, vine_count = excluded.vine_count, line = excluded.line
     where block_rows.estate_id = excluded.estate_id and block_rows.block_id = excluded.block_id`,
    [where.estateId, where.blockId, JSON.stringify(records)],
  );
}

/** New labels only; the rows themselves stay as they are. */
export async function relabelBlockRows(trx: TransactionOrKnex, estateId: string, labels: readonly { rowId: string; label: string; labelWas: string | null }[]): Promise<void> {
  await trx.raw(
    `update block_rows r set label = x."label", label_was = x."labelWas"
     from jsonb_to_recordset(?::jsonb) as x("rowId" uuid, "label" text, "labelWas" text)
     where r.estate_id = ? and r.id = x."rowId"`,
    [JSON.stringify(labels), estateId],
  );
}
