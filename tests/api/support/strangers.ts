import type { Knex } from 'knex';
import { randomUUID } from 'node:crypto';

/** Which table holds the thing that a parameter of an address names. */
export const tableOf: Record<string, string> = {
  personId: 'people', invitationId: 'invitations', jobId: 'jobs', measureId: 'measures', restrictionId: 'entry_restrictions', readingId: 'readings', conflictId: 'reading_conflicts',
  zoningId: 'zonings', planId: 'plans', roundId: 'rounds', blockId: 'blocks', layerId: 'layers', importId: 'imports', fileId: 'files', lotId: 'lots', noticeId: 'pick_notices', tankId: 'tanks', phoneId: 'phones', photoId: 'field_photos', bagId: 'bags', seasonId: 'seasons', resultId: 'readings', scenarioId: 'scenarios', earlierFileId: 'earlier_files',
};

/** Parameters that name no stored thing. */
export const notIds: ReadonlySet<string> = new Set(['day']);

const outline = 'SRID=4326;MULTIPOLYGON(((-7.51 38.61,-7.50 38.61,-7.50 38.62,-7.51 38.62,-7.51 38.61)))';

/** One thing of each kind in an estate, as the tables keep them: what somebody of another estate must never reach by its id. */
export async function layOneOfEach(knex: Knex, estateId: string, personId: string): Promise<Map<string, string>> {
  const ids = new Map<string, string>([['people', personId]]);
  const put = async (table: string, row: Record<string, unknown>) => {
    const [made] = (await knex(table).insert({ estateId, ...row }).returning('id')) as { id: string }[];
    ids.set(table, made!.id);
    return made!.id;
  };
  const seasonId = ((await knex('seasons').where({ estateId }).first('id')) as { id: string }).id;
  ids.set('seasons', seasonId);
  ids.set('measures', ((await knex('measures').where({ estateId }).first('id')) as { id: string }).id);
  const scenarioId = ((await knex('scenarios').where({ estateId }).first('id')) as { id: string }).id;
  ids.set('scenarios', scenarioId);
  await put('invitations', { email: `${randomUUID()}@test.example`, roles: knex.raw('array[?]', ['crew']), tokenHash: randomUUID(), expiresAt: '2999-01-01', invitedBy: personId });
  const blockId = await put('blocks', { name: 'Over the Wall', boundary: knex.raw('?::geometry', [outline]), areaM2: 900_000, epsg: 32629, gridKey: 'none' });
  await put('jobs', { kind: 'zoning', subjectType: 'zoning' });
  await put('files', { sha256: '0'.repeat(64), bytes: 1, originalName: 'wall.tif' });
  await put('earlier_files', { fileId: ids.get('files'), fileName: 'wall.csv' });
  await put('imports', { fileId: ids.get('files'), fileName: 'wall.tif', state: 'ready' });
  await put('layers', { type: 'vigour', name: 'Wall' });
  await put('entry_restrictions', { blockId, startsAt: '2026-01-01', endsAt: '2999-01-01', product: 'Wettable sulphur', labelInterval: '24 h', setBy: personId });
  const zoningId = await put('zonings', { blockId, seasonId, number: 1, state: 'draft', options: '{}', seed: 1, engineVersion: '1' });
  const planId = await put('plans', { blockId, zoningId, seasonId, name: 'Wall', options: '{}', result: '{}', seed: 1, engineVersion: '1' });
  await put('rounds', { planId, blockId, onDate: '2026-09-01' });
  await put('readings', { id: randomUUID(), seasonId, blockId, measureCode: 'brix', value: 22, unit: '°Brix', takenAt: '2026-08-01', source: 'field' });
  await put('bags', { code: 'WLLWLL' });
  await put('reading_conflicts', { kind: 'sameVine', readingIds: [ids.get('readings')!] });
  await put('phones', { deviceId: randomUUID(), personId, lastContactAt: '2026-08-01' });
  const rowId = await put('block_rows', { blockId, ordinal: 1, label: '1', pieces: '[]', vineCount: 1, line: knex.raw("ST_GeomFromText('MULTILINESTRING((-7.51 38.61,-7.50 38.61))', 4326)") });
  await put('field_photos', { id: randomUUID(), blockId, rowId, ordinal: 1, fileId: ids.get('files'), personId, takenAt: '2026-08-01' });
  await put('tanks', { name: 'Wall', litres: 5000 });
  const lotId = await put('lots', { scenarioId, seasonId, name: 'Wall' });
  await put('pick_notices', { lotId, number: 1, body: '{}', sentBy: personId });
  return ids;
}
