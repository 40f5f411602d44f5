/** Text for XML 1.0; characters that it cannot hold at all are left out. */
export function xmlText(text: string): string {
  // eslint-disable-next-line no-control-regex
  const allowed = text.replace(/[\u0000-\u0008\u000B\u000C\u000E-\u001F\uFFFE\uFFFF]/g, '');
  return allowed.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;');
}
