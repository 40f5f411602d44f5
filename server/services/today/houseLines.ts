import { raw } from 'objection';
import type { TodayOf } from '../../../shared/contracts/today.ts';
import type { Access } from '../../access/access.ts';
import { BackupRecord } from '../../models/BackupRecord.ts';
import { Bag } from '../../models/Bag.ts';
import { Lot } from '../../models/Lot.ts';
import { MailMessage } from '../../models/MailMessage.ts';
import { Reading } from '../../models/Reading.ts';
import type { Moment } from './today.ts';

const dayMs = 86_400_000;
const lotDays = 14;
const backupDays = 7;

/** Lots in force whose pick date is near or past, until they are picked. */
export async function lotLines({ estateId }: Access, { day }: Moment): Promise<TodayOf<'lot'>[]> {
  const until = new Date(Date.parse(day) + lotDays * dayMs).toISOString().slice(0, 10);
  const lots = await Lot.query()
    .alias('l')
    .joinRaw('join scenarios s on s.estate_id = l.estate_id and s.id = l.scenario_id and s.is_live')
    .joinRaw('join seasons n on n.estate_id = l.estate_id and n.id = l.season_id and n.closed_at is null')
    .where('l.estateId', estateId)
    .whereNot('l.state', 'picked')
    .where('l.pickOn', '<=', until)
    .orderBy('l.pickOn')
    .select('l.id', 'l.name', 'l.pickOn', 'l.state');
  return lots.map(({ id, name, pickOn, state }) => ({ kind: 'lot', id, name, pickOn: pickOn!, inDays: Math.round((Date.parse(pickOn!) - Date.parse(day)) / dayMs), confirmed: state === 'confirmed' }));
}

/** Readings that nobody has checked yet, block by block: forecasts wait for them. */
export async function provisionalLines({ estateId }: Access): Promise<TodayOf<'provisional'>[]> {
  const rows = (await Reading.query()
    .alias('r')
    .joinRaw('join blocks b on b.estate_id = r.estate_id and b.id = r.block_id and b.retired_at is null')
    .where('r.estateId', estateId)
    .where('r.state', 'provisional')
    .whereNull('r.excludedReason')
    .groupBy('b.id', 'b.name')
    .orderBy('b.name')
    .select('b.id as blockId', 'b.name as blockName', raw('count(*)::int as readings'))) as unknown as { blockId: string; blockName: string; readings: number }[];
  return rows.map(({ blockId, blockName, readings }) => ({ kind: 'provisional', blockId, blockName, readings }));
}

/** Bags that were closed in the field and have not reached the lab. */
export async function bagLines({ estateId }: Access): Promise<TodayOf<'bags'>[]> {
  const total = await Bag.query().where({ estateId, state: 'closed' }).resultSize();
  return total > 0 ? [{ kind: 'bags', total }] : [];
}

/** Mails that could not be delivered. */
export async function mailLines({ estateId }: Access): Promise<TodayOf<'mail'>[]> {
  const failed = await MailMessage.query().where({ estateId, state: 'failed' }).resultSize();
  return failed > 0 ? [{ kind: 'mail', failed }] : [];
}

/** Says so when the last good backup is a week old, or there is none. Backups hold all estates of this installation. */
export async function backupLines(_access: Access, { now }: Moment): Promise<TodayOf<'backup'>[]> {
  const last = await BackupRecord.query().where({ kind: 'backup', ok: true }).orderBy('archivedAt', 'desc').first();
  if (last && now.getTime() - last.archivedAt.getTime() < backupDays * dayMs) return [];
  return [{ kind: 'backup', lastAt: last?.archivedAt.toISOString() ?? null }];
}
