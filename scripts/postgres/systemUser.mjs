import { statSync } from 'node:fs';
import { runCommand } from '../process/runCommand.mjs';
import { Problem } from '../progress.mjs';

/** Debian's database packages make this user. PostgreSQL refuses to run as root. */
const databaseUser = 'postgres';

/**
 * The user that runs the server, as options for spawn: {} is ourselves. Root hands over to the owner of an existing
 * data folder, else to Debian's user for databases.
 */
export async function serverUser(existingFolder) {
  if (process.getuid() !== 0) return {};
  const owner = existingFolder === undefined ? undefined : statSync(existingFolder, { throwIfNoEntry: false });
  if (owner !== undefined && owner.uid !== 0) return { uid: owner.uid, gid: owner.gid };
  try {
    const [uid, gid] = await Promise.all(['-u', '-g'].map((flag) => runCommand('id', [flag, databaseUser])));
    return { uid: Number(uid), gid: Number(gid) };
  } catch {
    throw new Problem(`The system user "${databaseUser}" is missing; PostgreSQL does not run as root. Create it: adduser --system --group --home /var/lib/postgresql ${databaseUser}`);
  }
}
