/** As much of a text as fits so many bytes of UTF-8, in whole characters as people see them: half an emoji is none, and half of a surrogate pair can stand nowhere. */
export function cutText(text: string, mostBytes: number): string {
  if (Buffer.byteLength(text) <= mostBytes) return text;
  let kept = '';
  let bytes = 0;
  for (const { segment } of new Intl.Segmenter().segment(text)) {
    bytes += Buffer.byteLength(segment);
    if (bytes > mostBytes) break;
    kept += segment;
  }
  return kept;
}
