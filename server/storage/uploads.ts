import type { Request, RequestHandler } from 'express';
import multer from 'multer';
import { randomUUID } from 'node:crypto';
import { readFile, rm } from 'node:fs/promises';
import { storableInput } from '../../shared/contracts/storableText.ts';
import { fileStore } from './fileStore.ts';

const mostFiles = 40;

/** A file as it lies in the incoming folder; `name` is what its owner called it and never part of a path. */
export interface Upload {
  path: string;
  name: string;
  bytes: number;
}

/** Receives the multipart field "files" onto the disk, a piece at a time. Over the limit the upload is refused and its pieces are deleted. */
export function receiveFiles(limitBytes: number): RequestHandler {
  const storage = multer.diskStorage({
    destination: (_request, _file, done) => done(null, fileStore().incomingFolder),
    filename: (_request, _file, done) => done(null, randomUUID()),
  });
  return multer({ storage, fileFilter: refuseNameless, limits: { fileSize: limitBytes, files: mostFiles, fields: 20, parts: mostFiles + 20 }, defParamCharset: 'utf8', preservePath: false }).array('files', mostFiles);
}

/** A name that cannot be kept is refused before its file is received. */
function refuseNameless(_request: Request, file: Express.Multer.File, done: multer.FileFilterCallback): void {
  const { error } = storableInput.safeParse({ filename: file.originalname });
  if (error) done(error);
  else done(null, true);
}

/** What a request brought, whatever multer makes of it. */
export function uploadsOf(files: unknown): Upload[] {
  return Array.isArray(files) ? (files as Express.Multer.File[]).map((file) => ({ path: file.path, name: file.originalname, bytes: file.size })) : [];
}

/** Deletes what was received and not kept. */
export async function dropUploads(uploads: readonly Upload[]): Promise<void> {
  await Promise.all(uploads.map((upload) => rm(upload.path, { force: true })));
}

const smallText = 20_000;

/** Text of a small file that came along, such as a world file; null when there is none or it is no small text. */
export async function readSmallText(upload: Upload | undefined): Promise<string | null> {
  return upload === undefined || upload.bytes > smallText ? null : readFile(upload.path, 'utf8');
}
