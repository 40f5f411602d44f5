import { waitingBags } from './bagBox.ts';
import { fieldDatabase } from './fieldDatabase.ts';
import { countWaiting } from './outbox.ts';
import { countPhotos } from './photoBox.ts';

/** Everything of a person that is only on this phone: readings, findings, bags, photos. While it is not nothing, nobody signs out. */
export async function totalWaiting(personId: string): Promise<number> {
  return (await countWaiting(personId)) + (await waitingBags(personId)).length + (await countPhotos(personId));
}

/** Bags and photos of others who share this phone, or of all while nobody is signed in (''): only they can send them. */
export async function besideOfOthers(personId: string): Promise<number> {
  const database = await fieldDatabase();
  const [bags, photos] = await Promise.all([database.getAllFromIndex('bags', 'received', 0), database.getAllFromIndex('photos', 'received', 0)]);
  const theirs = (one: { personId: string }) => one.personId !== personId;
  return bags.filter((bag) => theirs(bag) && bag.outcome?.state !== 'refused').length + photos.filter((photo) => theirs(photo) && photo.refusal === undefined).length;
}
