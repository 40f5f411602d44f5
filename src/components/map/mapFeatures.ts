import type { Feature, FeatureCollection, Geometry } from 'geojson';
import { extentOf, namePlace, ringsOf, visualCentre } from '../../lib/mapPlaces.ts';
import type { ContourLine } from '../../lib/contourLines.ts';
import { patternName } from './mapImages.ts';
import type { AreaGeometry, MapBlock, MapCorners, MapGhost, MapLine, MapPoint, MapRow, MapZone } from './mapTypes.ts';

/** Turns what a view gives the map into GeoJSON for the map's sources. */

const collection = (features: Feature[]): FeatureCollection => ({ type: 'FeatureCollection', features });
const feature = (geometry: Geometry, properties: Record<string, unknown>): Feature => ({ type: 'Feature', geometry, properties });
const point = (coordinates: readonly [number, number], properties: Record<string, unknown>): Feature => feature({ type: 'Point', coordinates: [...coordinates] }, properties);

export function blockFeatures(blocks: readonly MapBlock[]): FeatureCollection {
  return collection(blocks.map((block) => feature(block.geometry, { id: block.id, restricted: block.restricted === true })));
}

export function nameFeatures(blocks: readonly MapBlock[]): FeatureCollection {
  return collection(
    blocks.map((block) => {
      const { lonLat, turnDeg } = namePlace(block.geometry, block.rowBearingDeg);
      return point(lonLat, { id: block.id, name: block.name, turn: turnDeg });
    }),
  );
}

export function zoneFeatures(zones: readonly MapZone[]): FeatureCollection {
  return collection(zones.map((zone) => feature(zone.geometry, { id: zone.id, blockId: zone.blockId, pattern: patternName(zone) })));
}

/** Ground in doubt, one feature or none. */
export function doubtFeatures(geometry: AreaGeometry | null): FeatureCollection {
  return collection(geometry === null ? [] : [feature(geometry, {})]);
}

export function pillFeatures(zones: readonly MapZone[]): FeatureCollection {
  return collection(zones.map((zone) => point(visualCentre(zone.geometry), { id: zone.id, image: `pill-${zone.zone}` })));
}

export function rowFeatures(rows: readonly MapRow[]): FeatureCollection {
  return collection(rows.map((row, index) => feature(row.geometry, { id: row.id, third: index % 3 === 0 })));
}

/** Number at the start of each row, a little before its first vine. */
export function rowEndFeatures(rows: readonly MapRow[]): FeatureCollection {
  return collection(
    rows.flatMap((row) => {
      const [first, second] = row.geometry.coordinates;
      if (!first || !second) return [];
      const length = Math.hypot(second[0]! - first[0]!, second[1]! - first[1]!);
      const back = length === 0 ? 0 : 0.00003 / length;
      return [point([first[0]! - (second[0]! - first[0]!) * back, first[1]! - (second[1]! - first[1]!) * back], { id: row.id, label: row.label })];
    }),
  );
}

export function ghostFeatures(ghosts: readonly MapGhost[]): FeatureCollection {
  return collection(
    ghosts.flatMap(({ id, geometry, chosen, points = [] }) => [
      feature(geometry, { id, chosen }),
      ...(points.length === 0 ? [] : [feature({ type: 'MultiPoint', coordinates: points.map((each) => [...each]) }, { id, chosen, dots: true })]),
    ]),
  );
}

export function ghostFlagFeatures(ghosts: readonly MapGhost[], colours: { chosen: string; other: string }): FeatureCollection {
  return collection(
    ghosts.flatMap((ghost) => {
      const corner = ghost.geometry.type === 'LineString' ? ghost.geometry.coordinates[0] : northWestCorner(ghost);
      return corner ? [point([corner[0]!, corner[1]!], { id: ghost.id, image: `flag-${ghost.letter}-${ghost.chosen ? colours.chosen : colours.other}` })] : [];
    }),
  );
}

function northWestCorner(ghost: MapGhost): number[] | null {
  if (ghost.geometry.type === 'LineString') return null;
  const box = extentOf([ghost.geometry]);
  if (box === null) return null;
  const [west, , , north] = box;
  const points = ringsOf(ghost.geometry).flat();
  return points.reduce((best, one) => (Math.hypot(one[0]! - west, one[1]! - north) < Math.hypot(best[0]! - west, best[1]! - north) ? one : best));
}

export function pointFeatures(points: readonly MapPoint[]): FeatureCollection {
  return collection(points.map((one) => feature(one.geometry, { id: one.id, image: `point-${one.kind}`, text: one.text ?? '' })));
}

export function lineFeatures(lines: readonly MapLine[]): FeatureCollection {
  return collection(lines.map((line) => feature(line.geometry, { id: line.id, kind: line.kind, stroke: line.stroke ?? 0, text: line.text ?? '' })));
}

interface ContourPlace {
  readonly corners: MapCorners;
  readonly columns: number;
  readonly rows: number;
  readonly stepM: number;
  readonly text: (heightM: number) => string;
}

/** Contours from grid places to lon/lat; each fifth is an index contour and carries its height. */
export function contourFeatures(lines: readonly ContourLine[], { corners, columns, rows, stepM, text }: ContourPlace): FeatureCollection {
  const [nw, ne, se, sw] = corners;
  const place = ([column, row]: readonly [number, number]): [number, number] => {
    const [x, y] = [(column + 0.5) / columns, (row + 0.5) / rows];
    const mix = (part: 0 | 1) => (1 - y) * ((1 - x) * nw[part] + x * ne[part]) + y * ((1 - x) * sw[part] + x * se[part]);
    return [mix(0), mix(1)];
  };
  return collection(
    lines.filter((line) => line.points.length > 3).map((line, index) =>
      feature({ type: 'LineString', coordinates: line.points.map(place) }, { id: index, index: Math.round(line.heightM / stepM) % 5 === 0, text: text(line.heightM) }),
    ),
  );
}
