import type { RowSide } from '../catalog/measures.ts';
import { alongRow, type RowFrame } from '../geo/rowFrame.ts';

/** The face of the canopy as walks know it: towards lower or higher s, or whichever lies on the way. */
export type AlleySide = 'either' | 'low' | 'high';

const towards: Readonly<Record<Exclude<RowSide, 'either'>, readonly [east: number, north: number]>> = { north: [0, 1], east: [1, 0], south: [0, -1], west: [-1, 0] };
/** About 10 degrees: rows that run so nearly towards a point of the compass have no face that looks to it. */
const facesAtLeast = 0.17;

/** The side of a block's rows that looks most towards a point of the compass (grid north); either where neither does, as with rows that run there. */
export function alleySideOf(frame: RowFrame, side: RowSide): AlleySide {
  if (side === 'either') return 'either';
  const [alongEast, alongNorth] = alongRow(frame);
  const [east, north] = towards[side];
  // Across the rows towards higher s is the right hand of the bearing.
  const facing = east * alongNorth - north * alongEast;
  if (Math.abs(facing) < facesAtLeast) return 'either';
  return facing > 0 ? 'high' : 'low';
}

/** Side for each of these measures, by code; those without one in the block are left out. */
export function alleySides(frame: RowFrame, measures: readonly { readonly code: string; readonly rowSide?: RowSide | undefined }[]): Record<string, 'low' | 'high'> {
  return Object.fromEntries(measures.flatMap(({ code, rowSide = 'either' }) => {
    const side = alleySideOf(frame, rowSide);
    return side === 'either' ? [] : [[code, side] as const];
  }));
}

/** From which alley a vine is served where these measures are read: the one a measure asks for, else either. */
export function sideFor(measures: readonly string[], sides: Readonly<Record<string, 'low' | 'high'>>): AlleySide {
  return measures.map((code) => sides[code]).find((side) => side !== undefined) ?? 'either';
}
