/** Narrow and unbreakable: a figure never parts from its unit at the end of a line. */
export const thinSpace = '\u202F';
export const minus = '\u2212';
const noFigure = '\u2013';

/** A number as screens and paper write it: narrow space for thousands, true minus, and the region's mark between whole and part. */
export function numberText(value: number, decimals: number, region: string): string {
  if (!Number.isFinite(value)) return noFigure;
  const parts = new Intl.NumberFormat(region, { minimumFractionDigits: decimals, maximumFractionDigits: decimals, useGrouping: 'always' }).formatToParts(value);
  const digitsAreZero = parts.every(({ type, value: text }) => (type !== 'integer' && type !== 'fraction') || /^0+$/.test(text));
  return parts
    .map(({ type, value: text }) => {
      if (type === 'group') return thinSpace;
      if (type === 'minusSign') return digitsAreZero ? '' : minus;
      return text;
    })
    .join('');
}
