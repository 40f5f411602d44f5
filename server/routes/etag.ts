import type { Request } from 'express';
import { Unconditional } from '../errors.ts';

/** Entity tag of a thing that counts its versions. */
export function etagOf(version: number): string {
  return `"${version}"`;
}

/** The version that a change was made on, from If-Match. Throws when the header is missing or is no version. */
export function versionMatched(request: Request): number {
  const found = /^\s*(?:W\/)?"?(\d{1,9})"?\s*$/.exec(request.get('if-match') ?? '');
  if (!found) throw new Unconditional();
  return Number(found[1]);
}
