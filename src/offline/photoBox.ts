import { http } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { fieldDatabase, type KeptPhoto } from './fieldDatabase.ts';
import { oneAtATime } from './oneAtATime.ts';
import { patienceMs } from './patience.ts';

/** Keeps a photo on the phone; it is sent when there is signal. */
export async function addPhoto(photo: KeptPhoto): Promise<void> {
  const transaction = (await fieldDatabase()).transaction('photos', 'readwrite', { durability: 'strict' });
  await Promise.all([transaction.store.add(photo), transaction.done]);
}

/** Photos on their way; what the server declined is told apart and does not count. */
export async function countPhotos(personId: string): Promise<number> {
  return (await photosOf(personId)).filter(({ refusal }) => refusal === undefined).length;
}

/** Every photo that a person took with this phone; of one that was received only that it was. */
export async function allPhotos(personId: string): Promise<KeptPhoto[]> {
  return (await (await fieldDatabase()).getAll('photos')).filter((photo) => photo.personId === personId);
}

async function photosOf(personId: string): Promise<KeptPhoto[]> {
  return (await (await fieldDatabase()).getAllFromIndex('photos', 'received', 0)).filter((photo) => photo.personId === personId);
}

/** Sends what waits, one by one; a photo leaves the phone only after the server answered for it, and one that is declined holds up no other. */
export const sendPhotos = oneAtATime(sendAll);

async function sendAll(personId: string): Promise<void> {
  for (const photo of await photosOf(personId)) {
    const form = new FormData();
    const { id, roundId, blockId, rowId, ordinal, note, at } = photo;
    form.append('facts', JSON.stringify({ id, roundId, blockId, rowId, ordinal, note, takenAt: at }));
    form.append('files', photo.picture, `${at.slice(0, 10)}-${id}.jpg`);
    try {
      await http.upload(`/api/estates/${photo.estateId}/field-photos`, form, { withinMs: patienceMs });
    } catch (error) {
      if (!(error instanceof HttpProblem)) throw error;
      if (!isDeclined(error)) return;
      await (await fieldDatabase()).put('photos', { ...photo, refusal: error.message, refusalCode: error.status === 413 ? 'fileTooLarge' : error.code });
      continue;
    }
    await leaveWord(photo);
  }
}

/** The picture makes room; that it was received stays, so that what was on this phone and what was received add up. */
async function leaveWord(photo: KeptPhoto): Promise<void> {
  const database = await fieldDatabase();
  const { refusal: _refusal, refusalCode: _code, ...rest } = photo;
  await database.put('photos', { ...rest, picture: new Blob(), received: 1 }).catch(() => database.delete('photos', photo.id));
}

/** Said of this photo, not of the line or of who is signed in. */
const isDeclined = ({ status }: HttpProblem): boolean => [400, 404, 409, 413, 415, 422].includes(status);
