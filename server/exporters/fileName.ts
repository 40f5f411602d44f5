/** File systems take 255 bytes a name; so many for each part leave room for the ending and the number a browser adds. */
const mostBytesOfPart = 80;

/** A name that every file system takes, made of the parts: a long one is cut by itself, so that what tells files of one block apart stays at the end. */
export function fileName(parts: readonly string[], extension: string): string {
  const name = parts.map((part) => shortened(part)).join(' ').replace(/[\\/:*?"<>|\p{Cc}\p{Bidi_Control}]+/gu, '-');
  // A dot in front hides a file on Unix.
  return `${name.trim().replace(/^\.+|^$/, '-')}.${extension}`;
}

/** Whole characters as people see them: half an emoji is none, and half of a surrogate pair cannot stand in a header. */
function shortened(part: string): string {
  let text = '';
  for (const { segment } of new Intl.Segmenter().segment(part)) {
    if (Buffer.byteLength(text + segment) > mostBytesOfPart) break;
    text += segment;
  }
  return text.trimEnd();
}
