import { FileStore } from '@tus/file-store';
import { Server } from '@tus/server';
import type { Request, Response } from 'express';
import { AsyncLocalStorage } from 'node:async_hooks';
import { randomUUID } from 'node:crypto';
import { readdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { storableInput } from '../../shared/contracts/storableText.ts';
import { Missing, Unusable } from '../errors.ts';
import { fileStore } from './fileStore.ts';
import type { Upload } from './uploads.ts';
import { say } from '../sentences/say.ts';

/** Whose request is being answered. An upload's name begins with it, so that nobody can go on with, or take, somebody else's. */
const owners = new AsyncLocalStorage<string>();
const mostUnfinished = 60;
const keptMs = 24 * 3_600_000;

export type PiecesReceiver = (request: Request, response: Response, owner: string) => Promise<void>;

/**
 * Receives large files piece by piece over a poor line, by the open tus protocol 1.0: what has arrived stays, and the browser
 * goes on from there. Session, permission and write token are asked of every piece as of any other request.
 */
export function receiveInPieces(limitBytes: number): PiecesReceiver {
  let server: Server | null = null;
  return async (request, response, owner) => {
    server ??= makeServer(limitBytes);
    request.url = request.originalUrl;
    const receiving = server;
    endWithoutWords(response);
    await owners.run(owner, () => receiving.handle(request, response));
  };
}

/** The protocol's server ends an answer with a callback alone, which the session's own ending takes for words to send. */
function endWithoutWords(response: Response): void {
  const end = response.end.bind(response) as (...words: unknown[]) => Response;
  response.end = ((...words: unknown[]) => {
    const [first] = words;
    if (typeof first !== 'function') return end(...words);
    response.once('finish', first as () => void);
    return end();
  }) as Response['end'];
}

function makeServer(limitBytes: number): Server {
  const owned = (id: string, owner: string | undefined) => owner !== undefined && id.startsWith(`${owner}.`) && /^[0-9a-f.-]{110}$/.test(id);
  return new Server({
    path: '/pieces',
    datastore: new FileStore({ directory: fileStore().incomingFolder, expirationPeriodInMilliseconds: keptMs }),
    maxSize: limitBytes,
    allowedOrigins: () => false,
    namingFunction: () => `${owners.getStore()}.${randomUUID()}`,
    generateUrl: (request, { id }) => `${new URL(request.url).pathname.replace(/\/$/, '')}/${id}`,
    onIncomingRequest: async (request, id) => {
      if (request.method !== 'POST' && !owned(id, owners.getStore())) throw answer(404, 'notFound', 'This upload is not known here. Send the file again from its beginning.');
    },
    onUploadCreate: async (_request, upload) => {
      const owner = owners.getStore()!;
      const open = (await readdir(fileStore().incomingFolder)).filter((name) => name.startsWith(`${owner}.`) && !name.endsWith('.json'));
      if (open.length >= mostUnfinished) throw answer(429, 'tooManyUploads', `${open.length} of your uploads are unfinished. Finish or stop some of them first.`);
      if (!upload.metadata?.filename) throw answer(400, 'noName', 'The upload does not say what its file is called.');
      if (!storableInput.safeParse(upload.metadata).success) throw answer(422, 'badInput', 'The name of the file holds a character that cannot be kept (NUL). Rename the file and send it again.');
      return {};
    },
    onResponseError: (_request, error) => ('status_code' in error && error.status_code === 413 ? answer(413, 'fileTooLarge', `The file is larger than ${Math.round(limitBytes / 2 ** 20)} MB, the most that is taken.`) : undefined),
  });
}

/** A refusal in the shape of every other problem of this server. */
function answer(status: number, code: string, detail: string): { status_code: number; body: string } {
  return { status_code: status, body: JSON.stringify({ status, code, detail }) };
}

/** Uploads of this owner that have arrived whole, for the same way in as files sent at once. Throws when one has not. */
export async function takePieces(owner: string, ids: readonly string[]): Promise<Upload[]> {
  const store = new FileStore({ directory: fileStore().incomingFolder });
  return Promise.all(ids.map(async (id): Promise<Upload> => {
    if (!id.startsWith(`${owner}.`)) throw new Missing();
    const upload = await store.getUpload(id).catch(() => null);
    if (upload === null) throw new Missing(say('uploadGone'));
    if (upload.size !== upload.offset) throw new Unusable('uploadUnfinished', say('uploadUnfinished', { file: upload.metadata?.filename ?? say('theFile'), got: upload.offset, size: upload.size ?? 0 }));
    await rm(join(fileStore().incomingFolder, `${id}.json`), { force: true });
    return { path: join(fileStore().incomingFolder, id), name: upload.metadata!.filename!, bytes: upload.size! };
  }));
}

/** Deletes what was received and went no further for a day. Returns how many files. */
export async function dropForgotten(now: Date): Promise<number> {
  const folder = fileStore().incomingFolder;
  const old = await Promise.all((await readdir(folder)).map(async (name) => ({ name, at: await stat(join(folder, name)).then(({ mtimeMs }) => mtimeMs, () => Infinity) })));
  const forgotten = old.filter(({ at }) => now.getTime() - at > keptMs);
  await Promise.all(forgotten.map(({ name }) => rm(join(folder, name), { force: true })));
  return forgotten.length;
}
