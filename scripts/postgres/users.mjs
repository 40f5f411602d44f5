// Which commands of this checkout use the private cluster now: one file each in .patchrow/running. The last one out
// stops the server. A file whose process has died counts for nothing.
import { mkdirSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { inState } from '../checkout.mjs';
import { identify, isAlive } from '../process/liveProcess.mjs';

const folder = () => inState('running');
const own = () => path.join(folder(), String(process.pid));

export function joinUsers(purpose) {
  mkdirSync(folder(), { recursive: true });
  writeFileSync(own(), JSON.stringify({ ...identify(process.pid), purpose }));
}

export function leaveUsers() {
  rmSync(own(), { force: true });
}

/** Living commands other than this one, as { pid, purpose }. */
export function otherUsers() {
  mkdirSync(folder(), { recursive: true });
  return readdirSync(folder()).flatMap((name) => {
    const file = path.join(folder(), name);
    const user = readUser(file);
    if (user === null || !isAlive(user)) rmSync(file, { force: true });
    else if (user.pid !== process.pid) return [user];
    return [];
  });
}

function readUser(file) {
  try {
    return JSON.parse(readFileSync(file, 'utf8'));
  } catch {
    return null;
  }
}
