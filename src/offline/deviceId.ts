import { readStored, writeStored } from '../lib/deviceStore.ts';

/** A name for this phone that says nothing about its owner. */
export function deviceId(): string {
  const known = readStored<string>('device');
  if (known !== null) return known;
  const made = crypto.randomUUID();
  writeStored('device', made);
  return made;
}
