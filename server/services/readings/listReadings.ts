import type { Point } from 'geojson';
import type { z } from 'zod';
import type { ReadingView, readingQuery } from '../../../shared/contracts/readings.ts';
import { may } from '../../../shared/catalog/permissions.ts';
import type { Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { BlockRow } from '../../models/BlockRow.ts';
import { asGeoJson } from '../../models/geometry.ts';
import { Person } from '../../models/Person.ts';
import { Reading } from '../../models/Reading.ts';
import { nameFor } from './readerName.ts';

const pageSize = 500;

/** Readings, newest first, in pages by key. Crew and lab see their own; names show as far as the role reaches. */
export async function listReadings(access: Access, filter: z.infer<typeof readingQuery>): Promise<{ items: ReadingView[]; next: string | null }> {
  const query = Reading.query().where('readings.estateId', access.estateId).select('readings.*', asGeoJson('readings.position').as('position')).orderBy('takenAt', 'desc').orderBy('id').limit(pageSize);
  if (!may(access.roles, 'results.see', 'read')) query.where({ personId: access.personId });
  if (filter.block) query.where({ blockId: filter.block });
  if (filter.round) query.where({ roundId: filter.round });
  if (filter.measure) query.where({ measureCode: filter.measure });
  if (filter.season) query.where({ seasonId: filter.season });
  const key = /^(.+)\|([0-9a-f-]{36})$/.exec(filter.after ?? '');
  if (key) query.whereRaw('(taken_at < ? or (taken_at = ? and readings.id > ?))', [key[1]!, key[1]!, key[2]!]);
  const rows = await query;
  const labels = await BlockRow.query().where({ estateId: access.estateId }).whereIn('id', [...new Set(rows.flatMap((row) => (row.rowId ? [row.rowId] : [])))]).select('id', 'label');
  const people = await Person.query().findByIds([...new Set(rows.flatMap((row) => (row.personId ? [row.personId] : [])))]).select('id', 'name');
  const last = rows.at(-1);
  return {
    items: rows.map((row) => viewOf(row, labels, nameFor(access, people, row.personId))),
    next: rows.length === pageSize && last ? `${last.takenAt.toISOString()}|${last.id}` : null,
  };
}

function viewOf(row: Reading, labels: BlockRow[], person: string | null): ReadingView {
  const position = row.position as Point | null;
  return {
    id: row.id,
    blockId: row.blockId,
    rowId: row.rowId,
    rowLabel: labels.find((label) => label.id === row.rowId)?.label ?? null,
    ordinal: row.ordinal,
    position: position ? [position.coordinates[0]!, position.coordinates[1]!] : null,
    roundId: row.roundId,
    measureCode: row.measureCode,
    value: row.value,
    unit: row.unit,
    samples: row.samples,
    takenAt: row.takenAt.toISOString(),
    receivedAt: row.receivedAt.toISOString(),
    person,
    source: row.source,
    state: row.state,
    excludedReason: row.excludedReason,
    flags: row.flags as string[],
    note: row.note,
  };
}

/** Leaves a reading out of the figures with a reason, or takes it in again (reason null). It is never deleted. */
export async function excludeReading(access: Access, readingId: string, reason: string | null): Promise<void> {
  await Reading.transaction(async (trx) => {
    const reading = await Reading.query(trx).findOne({ estateId: access.estateId, id: readingId }).forUpdate().throwIfNotFound();
    const before = { excludedReason: reading.excludedReason };
    await reading.$query(trx).patch({ excludedReason: reason, excludedBy: reason === null ? null : access.personId });
    await writeAudit(trx, access, { action: reason === null ? 'readings.include' : 'readings.exclude', subjectType: 'reading', subjectId: readingId, before, reason });
  });
}
