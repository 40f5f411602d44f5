import { cutText } from './cutText.ts';

/** File systems take 255 bytes a name; so many for each part leave room for the ending and the number a browser adds. */
const mostBytesOfPart = 80;

/** A name that every file system takes, made of the parts: a long one is cut by itself, so that what tells files of one block apart stays at the end. */
export function fileName(parts: readonly string[], extension: string): string {
  const name = parts.map((part) => cutText(part, mostBytesOfPart).trimEnd()).join(' ').replace(/[\\/:*?"<>|\p{Cc}\p{Bidi_Control}]+/gu, '-');
  // A dot in front hides a file on Unix.
  return `${name.trim().replace(/^\.+|^$/, '-')}.${extension}`;
}
