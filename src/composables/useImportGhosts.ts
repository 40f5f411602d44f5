import { computed, type ComputedRef } from 'vue';
import type { ImportView } from '../../shared/contracts/imports.ts';
import { extentOf, type Extent } from '../lib/mapPlaces.ts';

/** A possible placing of a file as the map draws it. */
export interface Ghost {
  readonly id: string;
  readonly letter: string;
  readonly geometry: { type: 'Polygon'; coordinates: number[][][] } | { type: 'MultiPolygon'; coordinates: number[][][][] };
  readonly chosen: boolean;
  /** Positions of the file itself: a box alone does not show swapped axes. */
  readonly points: readonly (readonly [number, number])[];
}

const letter = (index: number) => String.fromCharCode(65 + index);

/** Ghost outlines of the open line: one a candidate while its placing or the order of its axes is asked, its offered outlines, or where it lies. */
export function useImportGhosts(line: () => ImportView | null, placing: () => string | null): ComputedRef<Ghost[]> {
  return computed(() => {
    const open = line();
    if (open === null) return [];
    const question = open.questions.find((each) => !each.answered && (each.code === 'reference' || each.code === 'placement' || each.code === 'swapAxes'));
    if (question) {
      return question.choices.flatMap((choice, at): Ghost[] => (choice.outlineLonLat === null ? [] : [{ id: String(choice.value), letter: letter(at), geometry: { type: 'Polygon', coordinates: [choice.outlineLonLat] }, chosen: String(choice.value) === (question.code === 'swapAxes' ? 'true' : placing()), points: choice.sampleLonLat ?? [] }]));
    }
    if (open.outlines.length > 0) return open.outlines.map((outline) => ({ id: String(outline.index), letter: String(outline.index + 1), geometry: (outline.repair?.boundary ?? outline.boundary) as Ghost['geometry'], chosen: outline.problem === null, points: [] }));
    const ring = open.understood?.outlineLonLat;
    return ring ? [{ id: open.id, letter: letter(0), geometry: { type: 'Polygon', coordinates: [ring] }, chosen: true, points: open.understood?.sampleLonLat ?? [] }] : [];
  });
}

type Area = Ghost['geometry'];

/** What the map shows: the blocks, and the ghosts that lie no farther from them than the estate is wide. One far away is only a flag. */
export function extentInSight(blocks: readonly Area[], ghosts: readonly Ghost[]): Extent | null {
  const estate = extentOf(blocks);
  if (estate === null) return extentOf(ghosts.map(({ geometry }) => geometry));
  const [west, south, east, north] = estate;
  const [reachLon, reachLat] = [east - west, north - south];
  const isNear = ({ geometry }: Ghost) => {
    const [ghostWest, ghostSouth, ghostEast, ghostNorth] = extentOf([geometry])!;
    return ghostWest >= west - reachLon && ghostEast <= east + reachLon && ghostSouth >= south - reachLat && ghostNorth <= north + reachLat;
  };
  return extentOf([...blocks, ...ghosts.filter(isNear).map(({ geometry }) => geometry)]);
}
