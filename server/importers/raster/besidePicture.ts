/** What lies beside a picture in files of its own. */

/** Endings of world files. */
export const worldFileEnding = /\.(tfw|tfwx|tifw|tifwx|tiffw|wld)$/i;

export interface BesideTexts {
  worldFileText: string | null;
  projectionFileText: string | null;
}

/**
 * Reference system and place from the .aux.xml that GDAL lays beside a picture (its persistent auxiliary metadata): the six
 * numbers of `GeoTransform` are turned into a world file, which counts from the middle of the first pixel.
 */
export function auxiliaryText(xml: string | null): BesideTexts {
  if (xml === null) return { worldFileText: null, projectionFileText: null };
  const system = /<SRS[^>]{0,200}>([^<]{1,19000})<\/SRS>/.exec(xml)?.[1] ?? null;
  const numbers = (/<GeoTransform>([^<]{1,400})<\/GeoTransform>/.exec(xml)?.[1] ?? '').split(',').map(Number);
  const [x, a, b, y, d, e] = numbers as [number, number, number, number, number, number];
  const isPlaced = numbers.length === 6 && numbers.every(Number.isFinite);
  return {
    worldFileText: isPlaced ? [a, d, b, e, x + (a + b) / 2, y + (d + e) / 2].join('\n') : null,
    projectionFileText: system === null ? null : system.replace(/&quot;/g, '"').replace(/&apos;/g, "'").replace(/&lt;/g, '<').replace(/&gt;/g, '>').replace(/&amp;/g, '&'),
  };
}
