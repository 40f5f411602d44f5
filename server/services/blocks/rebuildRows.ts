import { randomUUID } from 'node:crypto';
import type { TransactionOrKnex } from 'objection';
import type { BlockWarning, RowEffects } from '../../../shared/contracts/blocks.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { keepOrdinals, matchRows, type RowMatch } from '../../../shared/geo/matchRows.ts';
import { rowLabels, type NumberingCorner } from '../../../shared/geo/numbering.ts';
import { buildRows, type BlockRows, type VineRow } from '../../../shared/geo/rows.ts';
import { rowsFromStored, storedPieces } from '../../../shared/geo/storedRows.ts';
import { firstOrdinal } from '../../../shared/geo/vines.ts';
import { BlockRow, writeBlockRows, type RowRecord } from '../../models/BlockRow.ts';
import { Vine, writeVines, type VineRecord } from '../../models/Vine.ts';

/** What of a block decides its rows. */
export interface PlantedBlock extends Pick<NumberingCorner, 'rowOneSide'> {
  id: string;
  estateId: string;
  boundary: MultiPolygonLonLat;
  epsg: number;
  rowBearingDeg: number;
  rowSpacingM: number;
  vineSpacingM: number;
  rowCount: number | null;
  headlandM: number;
  firstRowLabel: number;
}

export interface RebuiltRows {
  effects: RowEffects;
  warnings: BlockWarning[];
}

interface OldRow {
  id: string;
  label: string;
  labelWas: string | null;
}

/** Builds the rows of a block from its spacing and bearing, and lays them. */
export async function rebuildRows(trx: TransactionOrKnex, block: PlantedBlock, now: Date): Promise<RebuiltRows> {
  const built = buildRows(block.boundary, { ...block, bearingDeg: block.rowBearingDeg, bearingKind: 'true' });
  const labels = rowLabels(built.rows.length, block.rowOneSide, block.firstRowLabel).map(String);
  return {
    effects: await layRows(trx, block, { built, labels }, now),
    warnings: built.warnings.filter((warning): warning is BlockWarning & typeof warning => warning.code === 'noRows' || warning.code === 'rowSpacingImplied' || warning.code === 'rowCountNotReached'),
  };
}

/**
 * Stores rows of a block, built or surveyed. Rows and vines that are still there keep their identity. An old row is
 * retired, never deleted; so is one whose vines had to be counted anew while readings or lots refer to them.
 */
export async function layRows(trx: TransactionOrKnex, block: PlantedBlock, { built, labels }: { built: BlockRows; labels: readonly string[] }, now: Date): Promise<RowEffects> {
  const where = { estateId: block.estateId, blockId: block.id };
  const old = await BlockRow.query(trx).where(where).whereNull('retiredAt').orderBy('ordinal');
  const { matches, goneRowIds } = matchRows(rowsFromStored(block, old).rows.map((row, at) => ({ rowId: old[at]!.id, row })), built, block);
  const referred = await rowsReferredTo(trx, block.estateId, matches.map((match) => match.rowId));
  const planned = planRows(built, { labels, matches, referred, old: new Map(old.map((row) => [row.id, row])) });
  const retired = [...goneRowIds, ...planned.renewed];
  if (retired.length > 0) await BlockRow.query(trx).where(where).whereIn('id', retired).patch({ retiredAt: now });
  await writeBlockRows(trx, where, planned.records);
  const marksLost = await moveMarks(trx, where, planned.moves);
  return { kept: matches.length - planned.renewed.length, made: built.rows.length - matches.length + planned.renewed.length, retired: retired.length, marksLost };
}

interface Plan {
  records: RowRecord[];
  /** Old rows that get a new identity because their vines could not keep their numbers. */
  renewed: string[];
  /** For each matched row: where each old ordinal stands now. */
  moves: Map<string, { rowId: string; ordinals: Map<number, number> }>;
}

function planRows(built: BlockRows, known: { labels: readonly string[]; matches: readonly RowMatch[]; referred: ReadonlySet<string>; old: ReadonlyMap<string, OldRow> }): Plan {
  const plan: Plan = { records: [], renewed: [], moves: new Map() };
  const matchOf = new Map(known.matches.map((match) => [match.rowIndex, match]));
  built.rows.forEach((row, index) => {
    const match = matchOf.get(index);
    const kept = match ? keepOrdinals(row, match.oldOrdinals) : { row, moved: [] };
    const label = known.labels[index]!;
    const before = match ? known.old.get(match.rowId) : undefined;
    const renew = match !== undefined && kept.moved.length > 0 && known.referred.has(match.rowId);
    const id = match && !renew ? match.rowId : randomUUID();
    const labelWas = before === undefined ? null : before.label === label ? before.labelWas : before.label;
    plan.records.push({ id, ordinal: index + 1, label, labelWas, pieces: storedPieces(kept.row as VineRow, built.epsg), vineCount: row.vineCount });
    if (match && renew) plan.renewed.push(match.rowId);
    if (match) plan.moves.set(match.rowId, { rowId: id, ordinals: newOrdinals(match.oldOrdinals, firstOrdinal(kept.row)) });
  });
  return plan;
}

function newOrdinals(oldOrdinals: readonly (number | null)[], first: number): Map<number, number> {
  return new Map(oldOrdinals.flatMap((old, place) => (old === null ? [] : [[old, first + place] as const])));
}

/** Brings marks to the vine's new number; marks of vines that are no longer there go. Returns how many went. */
async function moveMarks(trx: TransactionOrKnex, where: { estateId: string; blockId: string }, moves: Plan['moves']): Promise<number> {
  if (moves.size === 0) return 0;
  const marks = await Vine.query(trx).where(where).whereIn('rowId', [...moves.keys()]);
  const moved = marks.flatMap(({ rowId, ordinal, state, proposed, notedBy, notedAt }): VineRecord[] => {
    const move = moves.get(rowId)!;
    const now = move.ordinals.get(ordinal);
    return now === undefined ? [] : [{ rowId: move.rowId, ordinal: now, state, proposed, notedBy, notedAt }];
  });
  if (marks.length > 0) await Vine.query(trx).where(where).whereIn('rowId', [...moves.keys()]).delete();
  await writeVines(trx, where, moved);
  return marks.length - moved.length;
}

/** Rows to whose vines something refers that must stay true: readings, target vines, lots. */
async function rowsReferredTo(trx: TransactionOrKnex, estateId: string, rowIds: readonly string[]): Promise<Set<string>> {
  if (rowIds.length === 0) return new Set();
  const found = (await trx.raw(
    `select id from block_rows r where r.estate_id = :estateId and r.id = any(:rowIds::uuid[]) and (
       exists (select 1 from readings x where x.estate_id = r.estate_id and x.row_id = r.id)
       or exists (select 1 from targets x where x.estate_id = r.estate_id and (x.row_id = r.id or x.reserve_row_id = r.id))
       or exists (select 1 from lot_row_runs x where x.estate_id = r.estate_id and x.row_id = r.id))`,
    { estateId, rowIds },
  )) as { rows: { id: string }[] };
  return new Set(found.rows.map((row) => row.id));
}
