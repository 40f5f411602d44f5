import type { ImportWarning, RasterUnderstood } from '../understood.ts';
import { countsDownwards, heightSystemUnit } from './heightSystems.ts';
import type { OpenRaster } from './openRaster.ts';

interface Notes {
  raster: OpenRaster;
  badNoData: string | null;
  isPalette: boolean;
  pictureColours: string | null;
  /** The file marks missing values by a number. */
  hasNoData: boolean;
}

/** What was noticed in the tags and does not stop the file from being used. */
export function bandWarnings({ raster, badNoData, isPalette, pictureColours, hasNoData }: Notes): ImportWarning[] {
  const { layout, structure, otherPages } = raster;
  const warnings: ImportWarning[] = [];
  if (badNoData !== null) {
    const value = badNoData.slice(0, 40);
    warnings.push({ code: 'no-data-text', text: `Its mark for missing values is "${value}", which is not a number; no value is treated as missing because of it.`, params: { value } });
  }
  if (isPalette) warnings.push({ code: 'palette', text: 'Its values are numbers of colours, not measurements. Use it only as a layer of classes.' });
  if (pictureColours !== null) warnings.push({ code: 'picture-colours', text: `Its bands are colours of a picture (${pictureColours}), not reflectance; an index made of them means nothing.`, params: { colours: pictureColours } });
  if (layout.bits < 8) warnings.push({ code: 'few-bits', text: `Its values have ${layout.bits} ${layout.bits === 1 ? 'bit' : 'bits'}: at most ${2 ** layout.bits} different values.`, params: { bits: layout.bits } });
  if (countsDownwards(heightSystemOf(raster.tags.geoKeys))) warnings.push({ code: 'depths', text: 'Its heights count downwards: a larger number means lower ground. Turn their sign round before they are used as elevation.' });
  const left = layout.byteCounts.reduce((count, bytes) => count + (bytes === 0 ? 1 : 0), 0);
  if (left > 0 && left < layout.byteCounts.length && !hasNoData) {
    const percent = Number(((left / layout.byteCounts.length) * 100).toPrecision(2));
    warnings.push({ code: 'sparse', text: `${percent} % of its tiles or strips are not in the file, and it has no mark for missing values; their ground counts as not measured.`, params: { percent } });
  }
  if (structure.brokenChain) warnings.push({ code: 'broken-chain', text: 'Its list of pictures is damaged after the first one; only the first is used.' });
  if (otherPages > 0) warnings.push({ code: 'more-pages', text: `It holds ${otherPages + 1} pictures; only the first is used.`, params: { pages: otherPages + 1 } });
  return warnings;
}

const unitCodes: Readonly<Record<number, RasterUnderstood['verticalUnit']>> = { 9001: 'metre', 9002: 'foot', 9003: 'US survey foot' };
const unitNames: readonly (readonly [RegExp, RasterUnderstood['verticalUnit']])[] = [
  [/^(us[ _-]?(survey[ _-]?)?(ft|foot|feet)|ft[ _-]?us|survey foot)$/i, 'US survey foot'],
  [/^(ft|foot|feet|international foot)$/i, 'foot'],
  [/^(m|met(er|re)s?)$/i, 'metre'],
];

/** Unit of heights, when the file says: by the unit of its band, the key for it, or the height system that it names. */
export function verticalUnitOf(keys: Readonly<Record<string, unknown>> | null, bandUnit: string | null): RasterUnderstood['verticalUnit'] {
  const named = unitNames.find(([pattern]) => pattern.test((bandUnit ?? '').trim()))?.[1];
  if (named) return named;
  const unit = unitCodes[Number(keys?.['VerticalUnitsGeoKey'])];
  if (unit) return unit;
  return heightSystemUnit(heightSystemOf(keys));
}

/** EPSG code of the height system that the file names; NaN where it names none. */
function heightSystemOf(keys: Readonly<Record<string, unknown>> | null): number {
  return Number(keys?.['VerticalGeoKey'] ?? keys?.['VerticalCSTypeGeoKey']);
}
