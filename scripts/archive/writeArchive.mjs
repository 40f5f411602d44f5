import { chmodSync, createReadStream, mkdirSync, mkdtempSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { inCheckout } from '../checkout.mjs';
import { filesBelow } from '../filesBelow.mjs';
import { CommandFailed, runCommand } from '../process/runCommand.mjs';
import { Problem } from '../progress.mjs';
import { dumpDatabase, serverVersion } from './databaseDump.mjs';
import { checkArchive, digest, dumpName, filesPrefix, makeManifest, manifestName } from './manifest.mjs';

const applicationVersion = () => JSON.parse(readFileSync(inCheckout('package.json'), 'utf8')).version;

/** Size and hash of every uploaded file. The store names files after their content, so a file never changes. */
async function listFiles(folder) {
  const files = [];
  for (const name of filesBelow(folder, ['.'])) {
    files.push({ path: name, ...(await digest(createReadStream(path.join(folder, name)))) });
  }
  return files;
}

/** Packs manifest, dump and files in this order. Names of uploaded files go in by standard input, so their number does not matter. */
async function pack(target, { workFolder, filesFolder, files }) {
  const args = ['--create', '--format=gnu', `--file=${target}`, '--owner=0', '--group=0', '--numeric-owner', '--mode=0600', '--no-recursion', `--directory=${workFolder}`, manifestName, dumpName];
  if (files.length > 0) args.push(`--directory=${filesFolder}`, `--transform=s,^\\./,${filesPrefix},`, '--null', '--files-from=-');
  await runCommand('tar', args, { input: files.map((file) => `./${file.path}\0`).join('') });
}

/**
 * Writes database and uploaded files into one archive at `target` and reads it back to check it. The database is dumped
 * first: a file that a row names is stored before the row, so it is there when the files are listed.
 * The archive appears under its name only when it is whole. Resolves to its manifest.
 */
export async function writeArchive({ url, filesFolder, target, createdAt = new Date() }) {
  mkdirSync(path.dirname(target), { recursive: true });
  const workFolder = mkdtempSync(`${target}.work-`);
  const draft = path.join(workFolder, 'archive.tar');
  try {
    const dumpFile = path.join(workFolder, dumpName);
    const tables = await dumpDatabase(url, dumpFile);
    const dump = await digest(createReadStream(dumpFile));
    const files = await listFiles(filesFolder);
    const manifest = makeManifest({ createdAt: createdAt.toISOString(), application: applicationVersion(), postgres: await serverVersion(url), dump, tables, files });
    writeFileSync(path.join(workFolder, manifestName), JSON.stringify(manifest, null, 1));
    await pack(draft, { workFolder, filesFolder, files });
    await checkArchive(draft);
    chmodSync(draft, 0o600); // It holds people's data.
    renameSync(draft, target);
    return manifest;
  } catch (error) {
    if (error instanceof CommandFailed) throw new Problem(`The backup could not be made.\n${error.message}`);
    throw error;
  } finally {
    rmSync(workFolder, { recursive: true, force: true });
  }
}
