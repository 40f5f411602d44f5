/**
 * Do drawn zones fill their block? Square metres of gap, overlap and ground outside, by lines 0.5 m apart across block and zones:
 * along a line the zones' stretches are exact, so what is missing or double on it is a length, and lengths times 0.5 m an area.
 */

import type { FeatureCollection, MultiPolygon, Polygon } from 'geojson';
import { toUtm, utmEpsg } from '../../shared/geo/utm.ts';

type Shapes = FeatureCollection<Polygon | MultiPolygon>;

const spacingM = 0.5;

export function groundFit(block: Shapes, zones: Shapes): { gapM2: number; overlapM2: number; outsideM2: number } {
  const [lon, lat] = ringsOf(block)[0]![0]!;
  const epsg = utmEpsg([lon!, lat!]);
  const metres = (shapes: Shapes) => ringsOf(shapes).map((ring) => ring.map(([east, north]) => toUtm([east!, north!], epsg)));
  const outline = metres(block);
  const each = zones.features.map((feature) => metres({ type: 'FeatureCollection', features: [feature] }));
  const ys = outline.flat().map(([, y]) => y);
  let [gap, overlap, outside] = [0, 0, 0];
  // An odd offset keeps lines off corners that lie on round metres.
  for (let y = Math.min(...ys) + 0.2371; y < Math.max(...ys); y += spacingM) {
    const marks = [...stretches(outline, y).map((mark) => ({ ...mark, isBlock: true })), ...each.flatMap((rings) => stretches(rings, y).map((mark) => ({ ...mark, isBlock: false })))].sort((a, b) => a.x - b.x);
    let [inBlock, inZones] = [0, 0];
    marks.forEach((mark, i) => {
      if (i > 0) {
        const length = mark.x - marks[i - 1]!.x;
        if (inBlock > 0 && inZones === 0) gap += length;
        if (inZones > 1) overlap += length * (inZones - 1);
        if (inBlock === 0 && inZones > 0) outside += length;
      }
      if (mark.isBlock) inBlock += mark.step;
      else inZones += mark.step;
    });
  }
  return { gapM2: gap * spacingM, overlapM2: overlap * spacingM, outsideM2: outside * spacingM };
}

function ringsOf({ features }: Shapes): number[][][] {
  return features.flatMap(({ geometry }) => (geometry.type === 'Polygon' ? geometry.coordinates : geometry.coordinates.flat()));
}

/** Ends of the stretches inside the rings along a line, by the even–odd rule. */
function stretches(rings: readonly (readonly (readonly number[])[])[], y: number): { x: number; step: 1 | -1 }[] {
  const found: number[] = [];
  for (const ring of rings) {
    ring.forEach(([ax, ay], i) => {
      const [bx, by] = ring[(i + 1) % ring.length]!;
      if (ay! > y !== by! > y) found.push(ax! + ((y - ay!) / (by! - ay!)) * (bx! - ax!));
    });
  }
  return found.sort((a, b) => a - b).map((x, i) => ({ x, step: i % 2 === 0 ? 1 : -1 }));
}
