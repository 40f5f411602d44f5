import type { TransactionOrKnex } from 'objection';
import type { RowEffects, RowsAtStake } from '../../../shared/contracts/blocks.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { toAlongAcross } from '../../../shared/geo/rowFrame.ts';
import { buildRows } from '../../../shared/geo/rows.ts';
import type { RowXY } from '../../../shared/geo/rowsLayout.ts';
import { rowsFromStored } from '../../../shared/geo/storedRows.ts';
import { Clash } from '../../errors.ts';
import type { Block } from '../../models/Block.ts';
import { BlockRow } from '../../models/BlockRow.ts';
import { say } from '../../sentences/say.ts';

/** Built rows come out again to the millimetre; surveyed ones differ by more than the width of a post (judgement). */
const sameM = 0.25;

/** True when the rows of a block are not those that its spacing and bearing would give: they came from a survey. */
export async function hasSurveyedRows(trx: TransactionOrKnex, block: Block): Promise<boolean> {
  const stored = await BlockRow.query(trx).where({ estateId: block.estateId, blockId: block.id }).whereNull('retiredAt').orderBy('ordinal');
  if (stored.length === 0) return false;
  const planted = { ...block, boundary: block.boundary.coordinates as unknown as MultiPolygonLonLat };
  const built = buildRows(planted.boundary, { ...planted, bearingDeg: block.rowBearingDeg, bearingKind: 'true' });
  if (built.rows.length !== stored.length) return true;
  const lies = (row: RowXY) => row.pieces.flatMap(({ fromXY, toXY }) => [fromXY, toXY]).map((xy) => toAlongAcross(built.frame, xy));
  return rowsFromStored(planted, stored).rows.some((row, at) => {
    const [here, there] = [lies(row), lies(built.rows[at]!)];
    return here.length !== there.length || here.some(({ s, t }, end) => Math.hypot(s - there[end]!.s, t - there[end]!.t) > sameM);
  });
}

/** Refuses to build rows anew where a survey, marks of vines or the rows of readings would be lost, and says how many. Runs inside the change, which is taken back. */
export async function requireNothingAtStake(trx: TransactionOrKnex, block: Block, { surveyed, effects, now }: { surveyed: boolean; effects: RowEffects; now: Date }): Promise<void> {
  const found = (await trx.raw(
    `select count(*)::int as n from block_rows r where r.estate_id = :estateId and r.block_id = :blockId and r.retired_at = :now and (
       exists (select 1 from readings x where x.estate_id = r.estate_id and x.row_id = r.id)
       or exists (select 1 from targets x where x.estate_id = r.estate_id and (x.row_id = r.id or x.reserve_row_id = r.id))
       or exists (select 1 from lot_row_runs x where x.estate_id = r.estate_id and x.row_id = r.id))`,
    { estateId: block.estateId, blockId: block.id, now },
  )) as { rows: { n: number }[] };
  const referred = found.rows[0]!.n;
  if (!surveyed && effects.marksLost === 0 && referred === 0) return;
  const atStake: RowsAtStake = { ...effects, surveyed, referred };
  const losses = [
    ...(surveyed ? [say('surveyGoes')] : []),
    ...(referred > 0 ? [say('rowsGo', { n: referred })] : []),
    ...(effects.marksLost > 0 ? [say('marksGo', { n: effects.marksLost })] : []),
  ];
  throw new Clash('rowsAtStake', say('rowsAtStake', { block: block.name, losses: { all: losses } }), { atStake });
}
