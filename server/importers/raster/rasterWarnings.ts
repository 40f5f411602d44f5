import type { ImportWarning, RasterUnderstood } from '../understood.ts';
import type { OpenRaster } from './openRaster.ts';

interface Notes {
  raster: OpenRaster;
  badNoData: string | null;
  isPalette: boolean;
}

/** What was noticed in the tags and does not stop the file from being used. */
export function bandWarnings({ raster, badNoData, isPalette }: Notes): ImportWarning[] {
  const { layout, structure, otherPages } = raster;
  const warnings: ImportWarning[] = [];
  if (badNoData !== null) {
    const value = badNoData.slice(0, 40);
    warnings.push({ code: 'no-data-text', text: `Its mark for missing values is "${value}", which is not a number; no value is treated as missing because of it.`, params: { value } });
  }
  if (isPalette) warnings.push({ code: 'palette', text: 'Its values are numbers of colours, not measurements. Use it only as a layer of classes.' });
  if (layout.bits < 8) warnings.push({ code: 'few-bits', text: `Its values have ${layout.bits} ${layout.bits === 1 ? 'bit' : 'bits'}: at most ${2 ** layout.bits} different values.`, params: { bits: layout.bits } });
  if (structure.brokenChain) warnings.push({ code: 'broken-chain', text: 'Its list of pictures is damaged after the first one; only the first is used.' });
  if (otherPages > 0) warnings.push({ code: 'more-pages', text: `It holds ${otherPages + 1} pictures; only the first is used.`, params: { pages: otherPages + 1 } });
  return warnings;
}

/** Unit of heights, when the file says (VerticalUnitsGeoKey). */
export function verticalUnitOf(keys: Readonly<Record<string, unknown>> | null): RasterUnderstood['verticalUnit'] {
  const unit = keys?.['VerticalUnitsGeoKey'];
  if (unit === 9001) return 'metre';
  if (unit === 9002) return 'foot';
  return unit === 9003 ? 'US survey foot' : null;
}
