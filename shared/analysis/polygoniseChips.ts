/**
 * Where a border runs close to the outline it can cut off chips smaller than a cell. Each goes to the zone behind the border
 * that cuts it off, by leaving that border piece out: nothing is lost and nothing overlaps.
 */
import { signedArea } from '../geo/rings.ts';
import type { Piece } from './polygoniseCut.ts';
import { ringOf, walkFaces, type Walk } from './polygoniseFaces.ts';

/** Walks around the faces once no chip below the area is left; the last bit of ground of a zone is never a chip. */
export function withoutChips(pieces: readonly Piece[], minAreaM2: number): Walk[] {
  let kept = pieces;
  for (;;) {
    const walks = walkFaces(kept);
    const cutting = new Set(chipBorders(walks, minAreaM2));
    if (cutting.size === 0) return walks;
    kept = kept.filter((piece) => !cutting.has(piece));
  }
}

function chipBorders(walks: readonly Walk[], minAreaM2: number): Piece[] {
  const outerWalks = walks.map((walk) => ({ walk, areaM2: signedArea(ringOf(walk, ({ points }) => points)) }));
  const facesOfZone = new Map<number | null, number>();
  for (const { walk, areaM2 } of outerWalks) if (areaM2 >= minAreaM2) facesOfZone.set(walk.zone, (facesOfZone.get(walk.zone) ?? 0) + 1);
  return outerWalks.flatMap(({ walk, areaM2 }) => {
    const inner = walk.steps.filter(({ piece }) => !piece.isOutline);
    const isChip = areaM2 > 0 && areaM2 < minAreaM2 && inner.length === 1 && walk.steps.length > 1 && (facesOfZone.get(walk.zone) ?? 0) > 0;
    return isChip ? inner.map(({ piece }) => piece) : [];
  });
}
