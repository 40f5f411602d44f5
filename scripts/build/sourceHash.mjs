import { createHash } from 'node:crypto';
import { existsSync, readFileSync, readdirSync, statSync } from 'node:fs';
import path from 'node:path';

/** Every file below the given files and folders, as paths relative to `base`, sorted; those that do not exist are left out. */
export function filesBelow(base, names) {
  return names.flatMap((name) => {
    const full = path.join(base, name);
    if (!existsSync(full)) return [];
    if (statSync(full).isFile()) return [name];
    return filesBelow(base, readdirSync(full).map((entry) => path.join(name, entry)));
  }).sort();
}

/** Hash of names and contents of everything below the given files and folders (times do not count: a clone changes them). */
export function sourceHash(base, names) {
  const hash = createHash('sha256');
  for (const name of filesBelow(base, names)) {
    const content = readFileSync(path.join(base, name));
    hash.update(`${name}\0${content.length}\0`).update(content);
  }
  return hash.digest('hex');
}
