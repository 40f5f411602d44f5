import { plainText } from './cells.ts';

const perOtherVolume = /\/ ?(100 ?ml|dl|cl|hl)\b/;
const berriesTold = /(\d+) ?(?:berr|bai|bay|bag|acin|beer)/;

/**
 * A unit that no row of `shared/lab/units` reads, such as mmol/L of malic acid or the weight of 200 berries: what is written
 * so is left out with a word, since taken for the usual unit it would be another figure.
 */
export function isForeignUnit(text: string, measure: string): boolean {
  const plain = plainText(text);
  if (measure === 'ta') return perOtherVolume.test(plain) && /m(illi)?eq|mol|\bmg\b/.test(plain);
  if (measure === 'berryWeight') return /\bmg\b/.test(plain) || !['1', '100', undefined].includes(berriesTold.exec(plain)?.[1]);
  if (!['brix', 'malic', 'yan'].includes(measure)) return false;
  return perOtherVolume.test(plain) || /mol\b|\bm?eq\b|\bm(illi)?val\b/.test(plain);
}
