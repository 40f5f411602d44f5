import { createHash } from 'node:crypto';
import type { Request, Response } from 'express';
import { Unconditional } from '../errors.ts';

/**
 * Sends a thing that counts its versions. The tag names the version and the content: restrictions, readings and marks on
 * vines change what is said of a thing without a new version, and a cache must not take that for unchanged.
 */
export function sendVersioned(response: Response, body: { readonly version: number }): void {
  const content = createHash('sha256').update(JSON.stringify(body)).digest('base64url').slice(0, 12);
  response.set('etag', `"${body.version}.${content}"`).json(body);
}

/** The version that a change was made on, from If-Match: a tag as it was sent, or the bare version. Throws when there is none. */
export function versionMatched(request: Request): number {
  const found = /^\s*(?:W\/)?"?(\d{1,9})(?:\.[\w-]{12})?"?\s*$/.exec(request.get('if-match') ?? '');
  if (!found) throw new Unconditional();
  return Number(found[1]);
}
