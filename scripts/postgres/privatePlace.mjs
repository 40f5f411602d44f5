// Where the private cluster lies, on which port, and its passwords: .patchrow/database.json, mode 600.
import { createHash, randomBytes } from 'node:crypto';
import { existsSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { inState, root } from '../checkout.mjs';
import { anyFreePort } from '../process/freePort.mjs';
import { commandWorks } from '../process/runCommand.mjs';
import { Problem } from '../progress.mjs';

const noteFile = () => inState('database.json');

/** The note, or null before the first start. */
export function readPlace() {
  if (!existsSync(noteFile())) return null;
  const note = JSON.parse(readFileSync(noteFile(), 'utf8'));
  return { ...note, folder: path.resolve(inState(), note.folder) };
}

/** Writes the note in one step. A folder inside the checkout is noted relative to it, so that the checkout can be moved. */
export function writePlace(place) {
  const relative = path.relative(inState(), place.folder);
  const note = { ...place, folder: relative.startsWith('..') ? place.folder : relative };
  writeFileSync(`${noteFile()}.new`, JSON.stringify(note, null, 2), { mode: 0o600 });
  renameSync(`${noteFile()}.new`, noteFile());
}

/**
 * Folder for a new cluster: in the checkout, or under /var/lib when the server's user may not pass through a folder
 * above it (a checkout in /root). Not under /var/tmp: Debian 13 empties that of files older than 30 days.
 */
async function chooseFolder(user) {
  const inside = inState('postgres');
  if (user.uid === undefined || (await commandWorks('test', ['-x', inState()], { cwd: '/', ...user }))) return inside;
  return path.join('/var/lib/patchrow', createHash('sha256').update(root).digest('hex').slice(0, 12));
}

/** The noted place, or a new one with fresh passwords. */
export async function definePlace(user) {
  const known = readPlace();
  if (known !== null) return known;
  const folder = await chooseFolder(user);
  if (existsSync(path.join(folder, 'data'))) {
    throw new Problem(`${folder} holds a database, but its passwords (${noteFile()}) are gone. Put that file back, or move the folder away and restore a backup.`);
  }
  const place = { folder, port: await anyFreePort(), adminPassword: randomBytes(24).toString('hex'), password: randomBytes(24).toString('hex') };
  writePlace(place);
  return place;
}
