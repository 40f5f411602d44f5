import type { MembershipBands } from '../../shared/analysis/zoneMemberships.ts';
import type { Language } from '../../shared/contracts/common.ts';
import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';

/** What every format of zones is written from: plain facts, no rows of the database. */
export interface ZoneExport {
  estateName: string;
  blockName: string;
  zoningNumber: number;
  zoningName: string;
  state: string;
  /** Of who takes the file away: tables open in a spreadsheet set to it. */
  language: Language;
  /** Instant the zones were made. */
  madeAt: Date;
  zones: readonly ExportedZone[];
  /** Runs of vines along the rows, in the block's own numbers. */
  runs: readonly ExportedRun[];
  cells: { labels: Uint8Array; cols: number; rows: number; cellSizeM: number; epsg: number; x0: number; y0: number };
  /** The layers on the same cells; empty unless the format asks for them. */
  layers: readonly { name: string; unit: string; cells: Float32Array }[];
  /** On the same cells too; null unless the format asks for them. */
  memberships: MembershipBands | null;
  /** Empty unless the format asks for them. */
  vines: readonly ExportedVine[];
}

export interface ExportedZone {
  number: number;
  /** Empty while nobody has named it. */
  name: string;
  colour: string | null;
  areaM2: number;
  vines: number;
  missing: number;
  polygonsLonLat: MultiPolygonLonLat;
}

export interface ExportedRun {
  rowLabel: string;
  fromVine: number;
  toVine: number;
  zone: number;
  zoneName: string;
  /** The stretch of row that belongs to the vines. */
  linesLonLat: readonly (readonly LonLat[])[];
}

/** A vine by its number in the row, with its zone and how surely the run put the ground there. */
export interface ExportedVine {
  rowLabel: string;
  vine: number;
  zone: number;
  zoneName: string;
  /** Of the zones as the run found and numbered them, 0…1; null where a layer is missing. */
  membership: { runZone: number; share: number; nextZone: number; certainty: number } | null;
  /** Counted among the doubtful on screens too. */
  isDoubtful: boolean;
  at: LonLat;
}
