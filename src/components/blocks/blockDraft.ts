import type { BlockChange, BlockView, NewBlockInput, PostColour } from '../../../shared/contracts/blocks.ts';
import type { OutlineGeometry } from '../../../shared/geo/outline.ts';

/** A block while somebody types: numbers may be missing, the outline is apart. */
export interface BlockDraft {
  name: string;
  variety: string;
  rootstock: string;
  plantedYear: number | null;
  bookAreaHa: number | null;
  withoutRows: boolean;
  rowBearingDeg: number | null;
  rowSpacingM: number | null;
  vineSpacingM: number | null;
  rowCount: number | null;
  headlandM: number | null;
  rowOneSide: 'low' | 'high';
  vineOneEnd: 'start' | 'end';
  firstRowLabel: number | null;
  startPostColour: PostColour;
  endPostColour: PostColour;
  cellSizeM: number | null;
  trellis: string;
  notes: string;
}

export function emptyDraft(): BlockDraft {
  return {
    name: '', variety: '', rootstock: '', plantedYear: null, bookAreaHa: null, withoutRows: false, rowBearingDeg: null, rowSpacingM: 2.5, vineSpacingM: 1.2, rowCount: null, headlandM: 0,
    rowOneSide: 'low', vineOneEnd: 'start', firstRowLabel: 1, startPostColour: 'white', endPostColour: 'red', cellSizeM: 2, trellis: '', notes: '',
  };
}

export function draftOf(block: BlockView): BlockDraft {
  const { name, variety, rootstock, plantedYear, bookAreaHa, withoutRows, rowBearingDeg, rowSpacingM, vineSpacingM, rowCount, headlandM, rowOneSide, vineOneEnd, firstRowLabel, startPostColour, endPostColour, cellSizeM, trellis, notes } = block;
  return { name, variety, rootstock, plantedYear, bookAreaHa, withoutRows, rowBearingDeg, rowSpacingM, vineSpacingM, rowCount, headlandM, rowOneSide, vineOneEnd, firstRowLabel, startPostColour, endPostColour, cellSizeM, trellis, notes };
}

export type MissingFact = 'name' | 'outline' | 'rowBearingDeg' | 'rowSpacingM' | 'vineSpacingM' | 'headlandM' | 'cellSizeM' | 'firstRowLabel';

const needed = ['rowBearingDeg', 'rowSpacingM', 'vineSpacingM', 'headlandM', 'cellSizeM', 'firstRowLabel'] as const;

/** The first thing without which nothing can be saved, in the order of the form; null when all is there. */
export function missingFact(draft: BlockDraft, geometry: OutlineGeometry | null): MissingFact | null {
  if (geometry === null) return 'outline';
  if (draft.name.trim() === '') return 'name';
  return needed.find((fact) => draft[fact] === null) ?? null;
}

/** The request for a new block. Ask `missingFact` before. */
export function newBlockOf(draft: BlockDraft, geometry: OutlineGeometry): NewBlockInput {
  return { ...withNumbers(draft), boundary: geometry as NewBlockInput['boundary'] };
}

/** What differs from the block as it was read, and nothing else. */
export function changesOf(draft: BlockDraft, before: BlockView, geometry: OutlineGeometry | null): BlockChange {
  const now = withNumbers(draft);
  const then = withNumbers(draftOf(before));
  const changed = Object.fromEntries((Object.keys(now) as (keyof typeof now)[]).filter((fact) => now[fact] !== then[fact]).map((fact) => [fact, now[fact]])) as BlockChange;
  const moved = geometry !== null && JSON.stringify(asMulti(geometry)) !== JSON.stringify(before.boundary.coordinates);
  return moved ? { ...changed, boundary: geometry as BlockChange['boundary'] } : changed;
}

function withNumbers(draft: BlockDraft) {
  const { rowBearingDeg, rowSpacingM, vineSpacingM, headlandM, cellSizeM, firstRowLabel, ...rest } = draft;
  return { ...rest, name: draft.name.trim(), rowBearingDeg: (rowBearingDeg ?? 0) % 360, rowSpacingM: rowSpacingM ?? 2.5, vineSpacingM: vineSpacingM ?? 1.2, headlandM: headlandM ?? 0, cellSizeM: cellSizeM ?? 2, firstRowLabel: firstRowLabel ?? 1 };
}

function asMulti(geometry: OutlineGeometry): unknown {
  return geometry.type === 'Polygon' ? [geometry.coordinates] : geometry.coordinates;
}
