import { http } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { fieldDatabase, type KeptPhoto } from './fieldDatabase.ts';
import { oneAtATime } from './oneAtATime.ts';

/** Keeps a photo on the phone; it is sent when there is signal. */
export async function addPhoto(photo: KeptPhoto): Promise<void> {
  const transaction = (await fieldDatabase()).transaction('photos', 'readwrite', { durability: 'strict' });
  void transaction.store.add(photo);
  await transaction.done;
}

export async function countPhotos(personId: string): Promise<number> {
  return (await waiting(personId)).length;
}

async function waiting(personId: string): Promise<KeptPhoto[]> {
  return (await (await fieldDatabase()).getAllFromIndex('photos', 'received', 0)).filter((photo) => photo.personId === personId);
}

/** Sends what waits, one by one; a photo leaves the phone only after the server answered for it. */
export const sendPhotos = oneAtATime(sendAll);

async function sendAll(personId: string): Promise<void> {
  for (const photo of await waiting(personId)) {
    const form = new FormData();
    const { id, roundId, blockId, rowId, ordinal, note, at } = photo;
    form.append('facts', JSON.stringify({ id, roundId, blockId, rowId, ordinal, note, takenAt: at }));
    form.append('files', photo.picture, `${at.slice(0, 10)}-${id}.jpg`);
    try {
      await http.upload(`/api/estates/${photo.estateId}/field-photos`, form);
    } catch (error) {
      if (error instanceof HttpProblem) return;
      throw error;
    }
    await (await fieldDatabase()).delete('photos', id);
  }
}
