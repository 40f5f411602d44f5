import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { filesBelow } from '../filesBelow.mjs';

/** Hash of names and contents of everything below the given files and folders (times do not count: a clone changes them). */
export function sourceHash(base, names) {
  const hash = createHash('sha256');
  for (const name of filesBelow(base, names)) {
    const content = readFileSync(path.join(base, name));
    hash.update(`${name}\0${content.length}\0`).update(content);
  }
  return hash.digest('hex');
}
