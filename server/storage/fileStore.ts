import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { mkdir, rename, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import type { Readable } from 'node:stream';

/** Originals by the SHA-256 of their bytes. The same bytes are kept once, whoever sent them; nothing is ever changed. */
export interface FileStore {
  /** Takes over the file at this path, which lies in the store's own incoming folder. */
  keep: (incomingPath: string) => Promise<{ sha256: string; bytes: number }>;
  read: (sha256: string) => Promise<Readable>;
  /** A path on this machine for readers that need to jump about in the file; valid while `use` runs. */
  withPath: <Result>(sha256: string, use: (path: string) => Promise<Result>) => Promise<Result>;
  remove: (sha256: string) => Promise<void>;
  /** Where uploads are received before they are kept. */
  incomingFolder: string;
}

/** Originals in a folder: two letters of the hash make the sub-folder. */
function folderStore(folder: string): FileStore {
  const incomingFolder = join(folder, 'incoming');
  const pathOf = (sha256: string) => {
    if (!/^[0-9a-f]{64}$/.test(sha256)) throw new Error(`"${sha256}" is no SHA-256`);
    return join(folder, sha256.slice(0, 2), sha256);
  };
  return {
    incomingFolder,
    keep: async (incomingPath) => {
      const { sha256, bytes } = await hashOf(incomingPath);
      const path = pathOf(sha256);
      await mkdir(join(folder, sha256.slice(0, 2)), { recursive: true });
      // A rename within the folder is whole or not at all; the same bytes replace themselves.
      await rename(incomingPath, path);
      return { sha256, bytes };
    },
    read: async (sha256) => {
      await stat(pathOf(sha256));
      return createReadStream(pathOf(sha256));
    },
    withPath: (sha256, use) => use(pathOf(sha256)),
    remove: (sha256) => rm(pathOf(sha256), { force: true }),
  };
}

async function hashOf(path: string): Promise<{ sha256: string; bytes: number }> {
  const hash = createHash('sha256');
  let bytes = 0;
  for await (const chunk of createReadStream(path, { highWaterMark: 1 << 20 }) as AsyncIterable<Buffer>) {
    hash.update(chunk);
    bytes += chunk.length;
  }
  return { sha256: hash.digest('hex'), bytes };
}

let opened: FileStore | null = null;

/** Names the folder of originals for this process. */
export async function openFileStore(folder: string): Promise<void> {
  opened = folderStore(folder);
  await mkdir(opened.incomingFolder, { recursive: true });
}

/** The store of this process. */
export function fileStore(): FileStore {
  if (!opened) throw new Error('The file store is not open');
  return opened;
}
