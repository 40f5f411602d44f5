import { readFile, writeFile } from 'node:fs/promises';
import type { Readable } from 'node:stream';
import { reachOf } from '../../../shared/catalog/permissions.ts';
import { newFieldPhoto, type FieldPhotoView, type NewFieldPhoto } from '../../../shared/contracts/fieldPhotos.ts';
import { storable } from '../../../shared/contracts/storableText.ts';
import { requireReach, type Access } from '../../access/access.ts';
import { Missing, Unusable } from '../../errors.ts';
import { loadBlockVines } from '../../ground/blockVines.ts';
import { plannedVines, strangeVine } from '../../ground/strangeVine.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { BlockRow } from '../../models/BlockRow.ts';
import { FieldPhoto } from '../../models/FieldPhoto.ts';
import { Person } from '../../models/Person.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { fileStore } from '../../storage/fileStore.ts';
import { dropUploads, type Upload } from '../../storage/uploads.ts';
import { vineWords } from '../plans/viewPlan.ts';
import { nameFor } from '../readings/readerName.ts';
import { withoutRecords } from './pictureBytes.ts';
import { say } from '../../sentences/say.ts';

/** Keeps a photo of a vine, freed of place and device. Sent again it is kept once; refused it leaves nothing. */
export async function keepPhoto(access: Access, facts: unknown, uploads: readonly Upload[]): Promise<{ id: string }> {
  try {
    const input = storable(newFieldPhoto).parse(readFacts(facts));
    const [upload, ...more] = uploads;
    if (!upload || more.length > 0) throw new Unusable('onePhoto', say('onePhoto'));
    await refuseStrange(access, input);
    if (await FieldPhoto.query().findOne({ estateId: access.estateId, id: input.id })) return { id: input.id };
    await writeFile(upload.path, withoutRecords(await readFile(upload.path)));
    const { sha256, bytes } = await fileStore().keep(upload.path);
    await FieldPhoto.transaction(async (trx) => {
      const file = await StoredFile.query(trx).insert({ estateId: access.estateId, sha256, bytes, originalName: `${input.takenAt.slice(0, 10)}-${input.id.slice(0, 8)}.jpg`, uploadedBy: access.personId });
      await FieldPhoto.query(trx).insert({ ...input, estateId: access.estateId, fileId: file.id, personId: access.personId, takenAt: new Date(input.takenAt) });
      await writeAudit(trx, access, { action: 'photos.keep', subjectType: 'photo', subjectId: input.id, after: { blockId: input.blockId, roundId: input.roundId } });
    });
    return { id: input.id };
  } finally {
    await dropUploads(uploads);
  }
}

/** The text that comes beside the picture. */
function readFacts(text: unknown): unknown {
  try {
    return JSON.parse(typeof text === 'string' ? text : '');
  } catch {
    throw new Unusable('badFacts', say('badFacts'));
  }
}

async function refuseStrange(access: Access, { blockId, rowId, ordinal, roundId }: NewFieldPhoto): Promise<void> {
  const { estateId, personId } = access;
  const row = await BlockRow.query().findOne({ estateId, blockId, id: rowId });
  if (!row) throw new Missing(say('unknownRowOfPhoto'));
  const isOwnOnly = requireReach(access, 'readings.record', 'own') === 'own';
  const round = roundId === null ? undefined : await Round.query().findOne({ estateId, id: roundId });
  const isMine = round && (!isOwnOnly || (await RoundPerson.query().findOne({ estateId, roundId: round.id, personId })));
  if ((roundId !== null || isOwnOnly) && !isMine) throw new Missing(say('roundOfOthers'));
  const { vineOneEnd } = await Block.query().findOne({ estateId, id: blockId }).select('vineOneEnd').throwIfNotFound();
  const strange = strangeVine(row, ordinal, { vineOneEnd: new Map([[blockId, vineOneEnd]]), planned: await plannedVines(undefined, estateId, roundId === null ? [] : [roundId]) });
  if (strange !== null) throw new Unusable(strange.code, say('noSuchVine', strange.facts!));
}

/** Photos, newest first; those who record only their own see their own. */
export async function listPhotos(access: Access, filter: { blockId?: string }): Promise<FieldPhotoView[]> {
  const { estateId } = access;
  const query = FieldPhoto.query().where({ estateId }).orderBy('takenAt', 'desc').limit(300);
  if (filter.blockId) query.where({ blockId: filter.blockId });
  if (reachOf(access.roles, 'readings.record') === 'own') query.where({ personId: access.personId });
  const photos = await query;
  const people = await Person.query().findByIds([...new Set(photos.flatMap(({ personId }) => personId ?? []))]).select('id', 'name');
  const grounds = new Map<string, Awaited<ReturnType<typeof loadBlockVines>>>();
  for (const blockId of new Set(photos.map((photo) => photo.blockId))) grounds.set(blockId, await loadBlockVines(estateId, blockId));
  return photos.map(({ id, blockId, rowId, ordinal, note, personId, takenAt }) => {
    const ground = grounds.get(blockId)!;
    const { rowLabel, vineNumber, place } = vineWords(ground, rowId, ordinal);
    return { id, blockId, blockName: ground.block.name, rowLabel, vine: vineNumber, ...(place ? { place } : {}), note, person: nameFor(access, people, personId), takenAt: takenAt.toISOString() };
  });
}

export async function openPhoto(access: Access, photoId: string): Promise<{ name: string; bytes: number; stream: Readable }> {
  const photo = await FieldPhoto.query().findOne({ estateId: access.estateId, id: photoId }).throwIfNotFound();
  if (reachOf(access.roles, 'readings.record') === 'own' && photo.personId !== access.personId) throw new Missing();
  const file = await StoredFile.query().findOne({ estateId: access.estateId, id: photo.fileId }).throwIfNotFound();
  return { name: file.originalName, bytes: file.bytes, stream: await fileStore().read(file.sha256) };
}
