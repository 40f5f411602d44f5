import type { BlockWarning } from '../../../shared/contracts/blocks.ts';
import type { Format } from '../../lib/format.ts';

type Translate = (key: string, named: Record<string, unknown>) => string;

/** What was noticed about an outline or its rows, as a sentence. */
export function warningWords(warning: BlockWarning, { t, format }: { t: Translate; format: Format }): string {
  const key = `blocks.warning.${warning.code}`;
  if (warning.code === 'overlaps') return t(key, { block: warning.block, area: format.withUnit('area', warning.areaHa) });
  if (warning.code === 'farFromEstate') return t(key, { distance: format.withUnit('distance', warning.distanceKm, 0) });
  if (warning.code === 'bookDiffers') return t(key, { book: format.withUnit('area', warning.bookAreaHa), drawn: format.withUnit('area', warning.drawnAreaHa) });
  if (warning.code === 'rowSpacingImplied') return t(key, { typed: format.withUnit('length', warning.typedM, 2), implied: format.withUnit('length', warning.impliedM, 2) });
  if (warning.code === 'rowCountNotReached') return t(key, { typed: format.number(warning.typed), laid: format.number(warning.laid) });
  return warning.code === 'tidied' ? t(`${key}.${warning.what}`, { n: format.number(warning.count) }) : t(key, {});
}
