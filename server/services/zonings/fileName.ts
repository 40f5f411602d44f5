/** A name that every file system takes, made of the parts. */
export function fileName(parts: readonly string[], extension: string): string {
  // eslint-disable-next-line no-control-regex
  return `${parts.join(' ').replace(/[\\/:*?"<>|\u0000-\u001F]+/g, '-').trim().slice(0, 120)}.${extension}`;
}
