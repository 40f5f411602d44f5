import type { RasterReadOptions } from '../../../server/importers/raster/describeRaster.ts';

/** One file of the corpus and what must become of it. */
export interface CorpusCase {
  /** A sentence about the file. */
  title: string;
  fileName: string;
  bytes: () => Uint8Array;
  options?: Partial<RasterReadOptions>;
  outcome: Outcome;
}

export type Outcome =
  | { kind: 'accepted'; warnings?: readonly string[]; values?: (understood: never) => unknown; equals?: unknown }
  | { kind: 'question'; question: string; choices?: readonly string[] }
  | { kind: 'refused'; code: string; says: RegExp };

export const accepted = (...warnings: string[]): Outcome => ({ kind: 'accepted', warnings });
export const question = (code: string, choices?: readonly string[]): Outcome => ({ kind: 'question', question: code, ...(choices === undefined ? {} : { choices }) });
export const refused = (code: string, says: RegExp): Outcome => ({ kind: 'refused', code, says });

export const text = (words: string): Uint8Array => new TextEncoder().encode(words);

/** The estate of the corpus: the rasters and outlines made here lie around it, in UTM zone 31 north. */
export const estateLonLat = [3.001, 44.703] as const;

/** A square of 100 m near the estate in degrees, counter-clockwise. */
export const squareLonLat: readonly (readonly [number, number])[] = [
  [3.001, 44.703],
  [3.00226, 44.703],
  [3.00226, 44.7039],
  [3.001, 44.7039],
  [3.001, 44.703],
];

/** The same in metres of EPSG:32631, clockwise as a shapefile has it. */
export const squareXY: readonly (readonly [number, number])[] = [
  [500000, 4950000],
  [500000, 4950100],
  [500100, 4950100],
  [500100, 4950000],
  [500000, 4950000],
];

export const wgs84Prj = 'GEOGCS["GCS_WGS_1984",DATUM["D_WGS_1984",SPHEROID["WGS_1984",6378137.0,298.257223563]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]]';
export const utm31Prj = `PROJCS["WGS_1984_UTM_Zone_31N",${wgs84Prj},PROJECTION["Transverse_Mercator"],PARAMETER["False_Easting",500000.0],PARAMETER["False_Northing",0.0],PARAMETER["Central_Meridian",3.0],PARAMETER["Scale_Factor",0.9996],PARAMETER["Latitude_Of_Origin",0.0],UNIT["Meter",1.0]]`;
