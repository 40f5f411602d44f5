import type { Feature } from 'geojson';
import type { GeometryRepair, ImportWarning } from '../understood.ts';
import type { CleaningNotes } from './cleanGeometry.ts';
import { areaHa } from './positions.ts';

/** What cleaning did, as warnings. */
export function noteWarnings({ closedRings, droppedHeights, droppedParts, badPositions }: CleaningNotes): ImportWarning[] {
  const warnings: ImportWarning[] = [];
  if (closedRings > 0) warnings.push({ code: 'closed-rings', text: `${counted(closedRings, 'outline was', 'outlines were')} not closed; the last corner was joined to the first.`, params: { count: closedRings } });
  if (droppedHeights > 0) warnings.push({ code: 'heights-dropped', text: 'Its corners have heights, which are not used.' });
  if (droppedParts > 0) warnings.push({ code: 'parts-dropped', text: `${counted(droppedParts, 'part has', 'parts have')} too few corners for a shape and ${droppedParts === 1 ? 'was' : 'were'} left out.`, params: { count: droppedParts } });
  if (badPositions > 0) warnings.push({ code: 'bad-positions', text: `${counted(badPositions, 'corner is', 'corners are')} not a pair of numbers and ${badPositions === 1 ? 'was' : 'were'} left out.`, params: { count: badPositions } });
  return warnings;
}

/** A shape that crosses itself, with the place and what a repair would make of its area. */
export function repairWarning({ layer, feature, problem, areaBeforeHa, areaAfterHa, repaired }: GeometryRepair): ImportWarning {
  const offer = repaired === null ? 'It cannot be repaired here; draw it again.' : `A repair would make its area ${areaAfterHa.toFixed(4)} ha instead of ${areaBeforeHa.toFixed(4)} ha.`;
  return { code: 'self-crossing', text: `In "${layer}", shape ${feature + 1}: ${problem} ${offer}`, params: { layer, feature: feature + 1 } };
}

interface LayerCounts {
  features: readonly Feature[];
  /** Records in the file, and those with a shape that could be used. */
  read: number;
  used: number;
  /** Features that cross themselves: their area means nothing. */
  crossing: ReadonlySet<number>;
}

/** Empty, doubled and very small shapes of one layer. */
export function layerWarnings(layer: string, { features, read, used, crossing }: LayerCounts): ImportWarning[] {
  const warnings: ImportWarning[] = [];
  if (used < read) warnings.push({ code: 'empty-shapes', text: `In "${layer}", ${counted(read - used, 'record has', 'records have')} no usable shape and ${read - used === 1 ? 'is' : 'are'} left out.`, params: { layer, count: read - used } });
  const doubled = countDoubled(features);
  if (doubled > 0) warnings.push({ code: 'doubled-shapes', text: `In "${layer}", ${counted(doubled, 'shape appears', 'shapes appear')} twice.`, params: { layer, count: doubled } });
  const tiny = features.filter(({ id, geometry }) => !crossing.has(Number(id)) && (geometry.type === 'Polygon' || geometry.type === 'MultiPolygon') && areaHa(geometry) < 1e-4).length;
  if (tiny > 0) warnings.push({ code: 'tiny-shapes', text: `In "${layer}", ${counted(tiny, 'shape is', 'shapes are')} smaller than 1 m².`, params: { layer, count: tiny } });
  return warnings;
}

/** Shapes with the same corners in the same order. */
function countDoubled(features: readonly Feature[]): number {
  const seen = new Set<string>();
  let doubled = 0;
  for (const { geometry } of features) {
    if (geometry.type === 'GeometryCollection') continue;
    const text = JSON.stringify(geometry.coordinates);
    // The whole text would hold every corner of the layer twice in memory.
    const key = `${geometry.type} ${text.length} ${text.slice(0, 200)} ${text.slice(-200)}`;
    if (seen.has(key)) doubled++;
    seen.add(key);
  }
  return doubled;
}

function counted(count: number, one: string, many: string): string {
  return `${count} ${count === 1 ? one : many}`;
}
