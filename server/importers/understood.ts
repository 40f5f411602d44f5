import type { FeatureCollection, MultiPolygon, Polygon } from 'geojson';
import type { LonLat, RingLonLat } from '../../shared/geo/coordinates.ts';

/** Something only a person can answer. Nothing is read from the file until it is answered. */
export interface ImportQuestion {
  code: 'reference-system' | 'no-data' | 'layer' | 'columns' | 'axes' | 'decimal-mark' | 'placement' | 'mask-band';
  text: string;
  /** Why it is asked, for the screens, which have words of their own for it. */
  why?: QuestionReason;
  choices: readonly QuestionChoice[];
}

/** Why something must be asked: a code with its values, and the whole English sentence. */
export interface QuestionReason {
  code: 'not-named' | 'no-prj' | 'unusable' | 'table-projection' | 'not-degrees' | 'degrees' | 'impossible' | 'far' | 'value-returns' | 'mask-like';
  text: string;
  params?: Readonly<Record<string, string | number>>;
}

export interface QuestionChoice {
  /** What is sent back as the answer. */
  value: string;
  label: string;
  /** Where the file would lie with this answer, for the ghost outline on the map. */
  outlineLonLat?: RingLonLat;
  /** Some positions of the file with this answer. */
  sampleLonLat?: readonly LonLat[];
  /** From the estate; null when the estate's place is not known. */
  distanceKm?: number | null;
  /** Metres by which its datum may put the file aside. */
  uncertaintyM?: number;
}

/** The file is used, but this was noticed. */
export interface ImportWarning {
  code: string;
  text: string;
  params?: Readonly<Record<string, string | number>>;
}

export interface ReferenceSystem {
  /** EPSG code, or null when the file describes a system without a code. */
  epsg: number | null;
  name: string;
  /** Definition that proj4 reads. */
  definition: string;
  /** Metres in one unit of the coordinates; null for degrees. */
  unitM: number | null;
  from: 'file' | 'projection file' | 'answer' | 'format';
}

export interface BandUnderstood {
  /** Counted from 1, as on every screen. */
  index: number;
  type: string;
  noData: number | null;
  scale: number;
  offset: number;
  description: string | null;
  /** Red, green, blue, grey, palette, alpha or null. */
  colour: string | null;
}

/** x = t[0] + t[1]·column + t[2]·row; y = t[3] + t[4]·column + t[5]·row; pixel corners are whole numbers. */
export type PixelTransform = readonly [number, number, number, number, number, number];

export interface RasterUnderstood {
  kind: 'raster';
  width: number;
  height: number;
  /** Bands of values; an alpha band and a mask are counted apart. */
  bands: readonly BandUnderstood[];
  alphaBand: number | null;
  hasMask: boolean;
  reference: ReferenceSystem | null;
  epsg: number | null;
  crsName: string | null;
  transform: PixelTransform | null;
  /** Mean side of a pixel on the ground; null without a reference system. */
  pixelSizeM: number | null;
  boundsLonLat: RingLonLat | null;
  isPoint: boolean;
  isRotated: boolean;
  compression: string;
  /** Pixel sizes of smaller copies in the file, as multiples of the full size. */
  overviewFactors: readonly number[];
  verticalUnit: 'metre' | 'foot' | 'US survey foot' | null;
  captured: string | null;
  questions: readonly ImportQuestion[];
  warnings: readonly ImportWarning[];
}

/** What an attribute or column holds; of a table of points, in its first 5,000 rows. */
export interface FieldUnderstood {
  name: string;
  kind: 'number' | 'text' | 'date' | 'boolean' | 'empty';
  /** Up to five different values, as text. */
  examples: readonly string[];
  distinct: number;
  missing: number;
}

export interface VectorLayer {
  name: string;
  geometryKinds: readonly string[];
  count: number;
  fields: readonly FieldUnderstood[];
  featuresLonLat: FeatureCollection;
}

export interface VectorUnderstood {
  kind: 'vector';
  layers: readonly VectorLayer[];
  reference: ReferenceSystem | null;
  epsg: number | null;
  repairs: readonly GeometryRepair[];
  questions: readonly ImportQuestion[];
  warnings: readonly ImportWarning[];
}

/** A shape that was not valid, with what a repair would make of it. */
export interface GeometryRepair {
  layer: string;
  /** Position of the feature in the layer, from 0. */
  feature: number;
  problem: string;
  placeLonLat: LonLat;
  areaBeforeHa: number;
  areaAfterHa: number;
  repaired: Polygon | MultiPolygon | null;
}

export interface PointsUnderstood {
  kind: 'points';
  separator: string;
  decimalMark: '.' | ',';
  encoding: string;
  hasHeader: boolean;
  columns: readonly FieldUnderstood[];
  /** Columns holding the position; null until known. */
  position: { first: string; second: string; frame: 'lonlat' | 'projected' } | null;
  reference: ReferenceSystem | null;
  epsg: number | null;
  /** Rows with a usable position, also while their place on the map is asked about. */
  count: number;
  /** One entry per kept row. */
  pointsLonLat: readonly LonLat[];
  /** Row number in the file (header = 1) of each kept row. */
  rowNumbers: readonly number[];
  /** Numbers of each numeric column for the kept rows; NaN where missing. */
  numbers: ReadonlyMap<string, Float64Array>;
  texts: ReadonlyMap<string, readonly string[]>;
  /** How many rows were set aside, by reason. */
  setAside: readonly { reason: string; count: number; rows: readonly number[] }[];
  questions: readonly ImportQuestion[];
  warnings: readonly ImportWarning[];
}

/** What a reader is told besides the bytes. */
export interface ReadOptions {
  /** Name of the file as its owner knows it. */
  fileName: string;
  /** Any point of the estate; ranks the candidates of a missing reference system. */
  estateLonLat?: LonLat | null;
  /** Answers to earlier questions. */
  answers?: ImportAnswers;
}

export interface ImportAnswers {
  epsg?: number;
  /** Text of a .prj file or a WKT definition. */
  projectionText?: string;
  /** A place far from the estate is right. */
  placement?: 'keep';
  /** null: every value counts. */
  noData?: number | null;
  /** The last band says where values are missing, although the file does not. */
  maskBand?: boolean;
  layer?: string;
  xColumn?: string;
  yColumn?: string;
  swapAxes?: boolean;
  decimalMark?: '.' | ',';
}
