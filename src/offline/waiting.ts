import { waitingBags } from './bagBox.ts';
import { countWaiting } from './outbox.ts';
import { countPhotos } from './photoBox.ts';

/** Everything of a person that is only on this phone: readings, findings, bags, photos. While it is not nothing, nobody signs out. */
export async function totalWaiting(personId: string): Promise<number> {
  return (await countWaiting(personId)) + (await waitingBags(personId)).length + (await countPhotos(personId));
}
