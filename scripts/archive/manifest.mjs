// The list of contents at the head of every backup, and the check of an archive against it.
import { createHash } from 'node:crypto';
import { Problem } from '../progress.mjs';
import { readTar } from './tarReader.mjs';

export const manifestName = 'manifest.json';
export const dumpName = 'database.dump';
export const filesPrefix = 'files/';
const format = 'patchrow-backup';
const formatVersion = 1;
const longestManifestBytes = 512_000_000;

/** Builds the manifest: what, when, made by which versions, row counts, and size and hash of every part. */
export function makeManifest({ createdAt, application, postgres, dump, tables, files }) {
  return { format, version: formatVersion, createdAt, application, postgres, database: { ...dump, tables }, files };
}

/** Path inside the archive to { bytes, sha256 } for everything that must be there beside the manifest. */
export function expectedParts(manifest) {
  return new Map([
    [dumpName, manifest.database],
    ...manifest.files.map((file) => [`${filesPrefix}${file.path}`, file]),
  ]);
}

/** A path that stays below the folder it is put in. */
export const isSafePath = (path) => path !== '' && !path.startsWith('/') && !path.includes('\0') && path.split('/').every((part) => part !== '' && part !== '.' && part !== '..');

/** SHA-256 of a stream of chunks, with its length; each chunk is passed on to `onChunk`. */
export async function digest(chunks, onChunk = async () => {}) {
  const hash = createHash('sha256');
  let bytes = 0;
  for await (const chunk of chunks) {
    hash.update(chunk);
    bytes += chunk.length;
    await onChunk(chunk);
  }
  return { bytes, sha256: hash.digest('hex') };
}

async function parseManifest(entry) {
  if (entry.name !== manifestName || entry.size > longestManifestBytes) throw new Problem('The archive is not a Patchrow backup: it does not begin with manifest.json.');
  const chunks = [];
  await digest(entry.content(), async (chunk) => { chunks.push(Buffer.from(chunk)); });
  let manifest;
  try {
    manifest = JSON.parse(Buffer.concat(chunks).toString('utf8'));
  } catch {
    throw new Problem('The list of contents (manifest.json) of the archive is damaged. Take another copy.');
  }
  if (manifest.format !== format) throw new Problem('The archive is not a Patchrow backup.');
  if (manifest.version !== formatVersion) throw new Problem(`The backup has format ${manifest.version}; this version of Patchrow reads ${formatVersion}. Update Patchrow.`);
  return manifest;
}

/**
 * Reads the whole archive and checks every part against the manifest: name, size, SHA-256, nothing missing, nothing
 * more. `onPart(name)` may return a function that takes the part's chunks. Resolves to the manifest.
 */
export async function checkArchive(file, onPart = () => undefined) {
  let manifest = null;
  let missing = new Map();
  for await (const entry of readTar(file)) {
    if (manifest === null) {
      manifest = await parseManifest(entry);
      missing = expectedParts(manifest);
      continue;
    }
    const expected = missing.get(entry.name);
    if (expected === undefined || !isSafePath(entry.name)) throw new Problem(`The archive holds a file that its list of contents does not name: ${entry.name}.`);
    missing.delete(entry.name);
    const found = await digest(entry.content(), onPart(entry.name));
    if (found.bytes !== expected.bytes || found.sha256 !== expected.sha256) throw new Problem(`${entry.name} in the archive is damaged: its checksum differs. Take another copy.`);
  }
  if (manifest === null) throw new Problem('The archive is empty.');
  if (missing.size > 0) throw new Problem(`${missing.size} files are missing in the archive, among them ${missing.keys().next().value}. Take another copy.`);
  return manifest;
}
