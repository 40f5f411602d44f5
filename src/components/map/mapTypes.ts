import type { LineString, MultiPolygon, Point, Polygon } from 'geojson';
import type { RampName } from '../../../shared/catalog/layerTypes.ts';
import type { ColourSet } from '../../lib/colours.ts';

export type AreaGeometry = Polygon | MultiPolygon;

export interface MapBlock {
  readonly id: string;
  readonly name: string;
  readonly geometry: AreaGeometry;
  /** Clockwise from north; the name is turned to it. Null leaves the name level. */
  readonly rowBearingDeg: number | null;
  /** Closed to entry: hatched brick. The ledger says it in words. */
  readonly restricted?: boolean;
}

export interface MapZone {
  readonly id: string;
  readonly blockId: string;
  /** 1 = lowest. */
  readonly zone: number;
  readonly name?: string;
  readonly geometry: AreaGeometry;
  readonly set?: ColourSet;
  /** A colour that people gave the zone, in place of the set's. */
  readonly colour?: string | null;
  /** Zones of the whole block, for the ordered colours. */
  readonly count: number;
}

export interface MapRow {
  readonly id: string;
  readonly label: string;
  readonly geometry: LineString;
}

/** A possible placing of a file. */
export interface MapGhost {
  readonly id: string;
  readonly letter: string;
  readonly geometry: AreaGeometry | LineString;
  readonly chosen: boolean;
  /** Positions that belong to it, drawn as dots. */
  readonly points?: readonly (readonly [number, number])[];
}

export interface MapPoint {
  readonly id: string;
  readonly geometry: Point;
  readonly kind: 'target' | 'reserve' | 'done' | 'gate' | 'reading' | 'estate';
  /** Short text beside or inside the mark, such as the walking order. */
  readonly text?: string;
  readonly zone?: number;
}

export interface MapLine {
  readonly id: string;
  readonly geometry: LineString;
  readonly kind: 'route' | 'track' | 'water';
  /** Which of the strokes of `routeStrokes` a route has; the first without. */
  readonly stroke?: number;
  /** Short text along it, such as the number of a walk. */
  readonly text?: string;
}

/** Cells of one layer on one block's grid, row 0 at the north; NaN or no-class is left clear. */
export interface MapRaster {
  readonly id: string;
  readonly cells: ArrayLike<number>;
  readonly columns: number;
  readonly rows: number;
  /** Corners of the outer cell edges: north-west, north-east, south-east, south-west. */
  readonly cornersLonLat: MapCorners;
  readonly ramp: RampName;
  /** Values at the ends of the ramp; classes ignore it. */
  readonly range: readonly [low: number, high: number];
  readonly opacity?: number;
  /** How much of its colour each cell has, 0…1, the rest being grey; all of it when not given. */
  readonly strength?: ArrayLike<number>;
  /** Colours that people gave classes, by class number. */
  readonly own?: Readonly<Record<number, string>>;
}

export type MapCorners = readonly [readonly [number, number], readonly [number, number], readonly [number, number], readonly [number, number]];

/** Heights for hillshade and contours, row 0 at the north, metres. */
export interface MapRelief {
  readonly cells: ArrayLike<number>;
  readonly columns: number;
  readonly rows: number;
  readonly cellSizeM: number;
  readonly cornersLonLat: MapCorners;
  /** Height between contours in metres; 0 draws none. */
  readonly contourStepM?: number;
}

export type MapTarget = { readonly kind: 'block' | 'zone' | 'ghost' | 'point'; readonly id: string };
