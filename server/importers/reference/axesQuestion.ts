import { distanceKm } from './distance.ts';
import { looksLikeDegrees } from './candidates.ts';
import { toLonLat } from './referenceSystem.ts';
import type { ImportQuestion, ReadOptions, ReferenceSystem } from '../understood.ts';

/** A swap must bring the file this much nearer to the estate to be worth asking. */
const NEAR_KM = 100;

/**
 * Latitude and longitude in the wrong order: asked when the file as it stands has no place on Earth, or lies far from an
 * estate that it would meet with its axes swapped. Null when there is nothing to ask.
 */
export function axesQuestion(outline: readonly (readonly [number, number])[], reference: ReferenceSystem, { estateLonLat = null, answers }: Pick<ReadOptions, 'estateLonLat' | 'answers'>): ImportQuestion | null {
  if (answers?.swapAxes !== undefined) return null;
  const convert = toLonLat(reference);
  const swapped = outline.map(([x, y]) => convert([y, x]));
  const asIs = outline.map((position) => convert(position));
  if (!swapped.every((position) => position !== null)) return null;
  const isImpossible = !asIs.every((position) => position !== null);
  const degrees = reference.unitM === null && outline.every(([x, y]) => Math.abs(x) <= 90 && Math.abs(y) <= 180);
  if (isImpossible && degrees) return question(reference, { asIs: null, swapped });
  if (isImpossible || estateLonLat === null || (reference.unitM === null && !looksLikeDegrees(outline))) return null;
  const away = distanceKm(asIs[0]!, estateLonLat);
  const awaySwapped = distanceKm(swapped[0]!, estateLonLat);
  return awaySwapped < NEAR_KM && away > 5 * NEAR_KM ? question(reference, { asIs: asIs.filter((position) => position !== null), swapped }) : null;
}

type Ring = readonly (readonly [number, number])[];

function question(reference: ReferenceSystem, places: { asIs: Ring | null; swapped: Ring }): ImportQuestion {
  const names = reference.unitM === null ? 'latitude and longitude' : 'easting and northing';
  return {
    code: 'axes',
    text: `Its ${names} seem to be in the wrong order. Swap them?`,
    choices: [
      { value: 'swap', label: 'Yes, swap them', outlineLonLat: places.swapped },
      ...(places.asIs === null ? [] : [{ value: 'keep', label: 'No, leave them as they are', outlineLonLat: places.asIs }]),
    ],
  };
}
