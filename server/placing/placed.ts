import type { ImportAnswers } from '../../shared/contracts/imports.ts';
import type { AsideReading, LayerClass, LayerFinding, LayerStatistics, LayerSurvey } from '../../shared/contracts/layers.ts';
import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';

/** Texts of small files that came beside the file. */
export interface Companions {
  worldFileText: string | null;
  projectionFileText: string | null;
  /** Where the mask of a picture lies that came in a file of its own. */
  maskPath: string | null;
}

/** A file on this machine and everything that was said about it. Crosses into a thread as a structured clone. */
export interface SourceFile {
  path: string;
  fileName: string;
  estateLonLat: LonLat | null;
  answers: ImportAnswers;
  companions: Companions;
}

export interface TargetBlock {
  id: string;
  boundary: MultiPolygonLonLat;
  cellSizeM: number;
  rowSpacingM: number;
  rowBearingDeg: number;
  /** Its rows as lines; only where the answers ask for values along rows. */
  rows: LonLat[][];
}

export interface PlaceInput {
  source: SourceFile;
  blocks: TargetBlock[];
  /** True for a new file: elevations then also give the estate's relief. */
  withRelief?: boolean;
}

/** Cells of one layer on one block, judged. */
export interface PlacedCells {
  blockId: string;
  gridKey: string;
  cells: Float32Array;
  coverage: number;
  statistics: LayerStatistics;
  findings: LayerFinding[];
  /** Places of the findings, a bit each; null where none has a place of its own. */
  marks: Uint8Array | null;
  /** Of points: how the surface was made, and what was set aside where. */
  survey?: LayerSurvey & { aside: AsideReading[] };
}

/** Heights of the land round all blocks, coarse: for the map, never for a calculation. */
export interface PlacedRelief {
  epsg: number;
  x0: number;
  y0: number;
  cellSizeM: number;
  cols: number;
  rows: number;
  cells: Float32Array;
}

/** A layer made of a file: the one that was asked for, or one that follows from it such as slope. */
export interface PlacedLayer {
  type: string;
  /** Type of the layer it is derived from, or null. */
  derivedFrom: string | null;
  unit: string;
  /** What the values are, for the record: an index, a band or a field. */
  value: string | null;
  classes: LayerClass[] | null;
  pixelSizeM: number | null;
  reference: string | null;
  blocks: PlacedCells[];
  relief?: PlacedRelief;
}
