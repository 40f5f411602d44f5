import { existsSync, readdirSync, statSync } from 'node:fs';
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
