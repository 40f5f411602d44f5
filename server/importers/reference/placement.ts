import type { LonLat } from '../../../shared/geo/coordinates.ts';
import type { ImportQuestion, ImportWarning, ReadOptions, ReferenceSystem } from '../understood.ts';
import { looksLikeDegrees, referenceChoices, referenceQuestion } from './candidates.ts';
import { distanceKm } from './distance.ts';
import { toLonLat } from './referenceSystem.ts';

type XYPair = readonly [number, number];

export interface PlacementFindings {
  /** The outline in degrees; null when the system cannot be right. */
  outlineLonLat: LonLat[] | null;
  questions: ImportQuestion[];
  warnings: ImportWarning[];
}

/** Beyond this a layer is probably misplaced and is reported; far beyond it must be confirmed. */
const ALARM_KM = 2;
const CONFIRM_KM = 50;

/**
 * Does the file lie where its reference system says? `outline` is in the file's own coordinates. Numbers that cannot be
 * of the system become a question, and so does a place far from the estate, with the systems that would bring it near.
 */
export function checkPlacement(outline: readonly XYPair[], reference: ReferenceSystem, { estateLonLat = null, answers }: Pick<ReadOptions, 'estateLonLat' | 'answers'>): PlacementFindings {
  const convert = toLonLat(reference);
  const ring = outline.map(convert);
  const isPlaced = ring.every((position) => position !== null);
  const [x, y] = outline[0] ?? [NaN, NaN];
  if (!isPlaced || (reference.unitM !== null && looksLikeDegrees(outline))) {
    const text = `${reference.from === 'answer' ? 'Taken as' : 'The file says it is in'} ${reference.name}, ${reference.from === 'answer' ? '' : 'but '}its coordinates (${short(x)}, ${short(y)}) ${isPlaced ? 'look like degrees' : 'cannot be of that system'}.`;
    const why = { code: isPlaced ? ('degrees' as const) : ('impossible' as const), text, params: { name: reference.name, x: short(x), y: short(y) } };
    return { outlineLonLat: null, questions: [referenceQuestion(outline, estateLonLat, why)], warnings: [] };
  }
  if (estateLonLat === null) return { outlineLonLat: ring, questions: [], warnings: [] };
  const km = distanceToBox(ring, estateLonLat);
  if (km <= ALARM_KM) return { outlineLonLat: ring, questions: [], warnings: [] };
  const shown = km < 10 ? Number(km.toFixed(1)) : Math.round(km);
  const text = `It lies ${shown} km from your estate.`;
  if (km <= CONFIRM_KM || answers?.placement === 'keep') {
    return { outlineLonLat: ring, questions: [], warnings: [{ code: 'far-from-estate', text: `${text} Check that it is the right file and that its reference system is the one it names.`, params: { km: shown } }] };
  }
  const keep = { value: 'keep', label: `It does lie there (${reference.name})`, outlineLonLat: ring, distanceKm: shown };
  const nearby = referenceChoices(outline, estateLonLat).filter((choice) => (choice.distanceKm ?? Infinity) < CONFIRM_KM);
  return {
    outlineLonLat: ring,
    questions: [
      {
        code: 'placement',
        text: `${text} Is that right, or are its coordinates in another reference system than ${reference.name}?`,
        why: { code: 'far', text, params: { km: shown, name: reference.name } },
        choices: [keep, ...nearby],
      },
    ],
    warnings: [],
  };
}

/** From the estate to the nearest point of the box around the positions; 0 inside. */
function distanceToBox(positions: readonly LonLat[], [lon, lat]: LonLat): number {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [x, y] of positions) {
    west = Math.min(west, x);
    east = Math.max(east, x);
    south = Math.min(south, y);
    north = Math.max(north, y);
  }
  return distanceKm([lon, lat], [Math.min(Math.max(lon, west), east), Math.min(Math.max(lat, south), north)]);
}

function short(value: number): string {
  return String(Number(value.toPrecision(9)));
}
