import { readStored, writeStored } from '../lib/deviceStore.ts';
import { newId } from '../lib/newId.ts';

/** A name for this phone that says nothing about its owner. */
export function deviceId(): string {
  const known = readStored<string>('device');
  if (known !== null) return known;
  const made = newId();
  writeStored('device', made);
  return made;
}
