import { Zip, ZipPassThrough } from 'fflate';
import { randomUUID } from 'node:crypto';
import { createReadStream, createWriteStream } from 'node:fs';
import { stat } from 'node:fs/promises';
import { basename, join } from 'node:path';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { fileStore } from './fileStore.ts';
import type { Upload } from './uploads.ts';

/** One day for all entries: the same parts make the same archive, which is then kept once. */
const packedOn = new Date(1980, 0, 1, 12);

/** Files that are parts of one, unchanged, in an archive in the incoming folder: readers take it as if it had been sent packed. */
export async function packTogether(parts: readonly Upload[], name: string): Promise<Upload> {
  const path = join(fileStore().incomingFolder, randomUUID());
  await pipeline(Readable.from(archiveOf(parts)), createWriteStream(path));
  return { path, name, bytes: (await stat(path)).size };
}

async function* archiveOf(parts: readonly Upload[]): AsyncGenerator<Uint8Array> {
  const waiting: Uint8Array[] = [];
  const zip = new Zip((error, bytes) => {
    if (error) throw error;
    waiting.push(bytes);
  });
  for (const part of parts) {
    // Names come from people: without folders, so that an archive holds nothing but files beside each other.
    const entry = new ZipPassThrough(basename(part.name.replaceAll('\\', '/')));
    entry.mtime = packedOn;
    zip.add(entry);
    for await (const chunk of createReadStream(part.path, { highWaterMark: 1 << 20 }) as AsyncIterable<Buffer>) {
      entry.push(new Uint8Array(chunk));
      yield* waiting.splice(0);
    }
    entry.push(new Uint8Array(0), true);
    yield* waiting.splice(0);
  }
  zip.end();
  yield* waiting.splice(0);
}
