/**
 * Number from what a person typed: decimal comma or point, spaces between thousands, true minus. Null when empty, NaN when unreadable.
 * A single comma is a decimal comma, because thousands are written with a space here. `readNumber('4 140,5')` is 4140.5.
 */
export function readNumber(text: string): number | null {
  const bare = text.replace(/[\s\u2009\u202f\u00a0]/g, '').replace(/\u2212/g, '-').replace(',', '.');
  if (bare === '') return null;
  return /^[+-]?(\d+\.?\d*|\.\d+)$/.test(bare) ? Number(bare) : Number.NaN;
}
