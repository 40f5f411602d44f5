import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import type { LayerPair } from '../../../shared/analysis/layerPairs.ts';
import type { NumberNote } from '../../../shared/analysis/numberNotes.ts';
import type { ReportLanguage } from './reportTexts.ts';

/** What the printed report of a zoning is made from. */
export interface ZoneReport {
  language: ReportLanguage;
  units: 'metric' | 'us';
  size: 'A4' | 'Letter';
  today: Date;
  timeZone: string;
  estateName: string;
  blockName: string;
  number: number;
  name: string;
  state: string;
  /** Season for which they are in force, where a later one has begun. */
  pastSeason: string | null;
  madeAt: Date;
  verdict: 'one' | 'test' | 'several' | null;
  isJudged: boolean;
  advisedZones: number | null;
  reasons: readonly { code: string; about: string | null }[];
  /** Number of zones that the report shows. */
  shown: number;
  /** What a person should know of them. */
  warnings: readonly { code: string; about: string | null; figures: Readonly<Record<string, number | null>> }[];
  /** Number of zones that was tested on fruit. */
  fruitZones: number | null;
  /** What is said of the number of zones beside others. */
  numbers: readonly NumberNote[];
  layers: readonly ReportLayer[];
  differences: readonly { layerId: string; lowest: number; highest: number; withinSd: number; explained: number | null }[];
  layerPairs: readonly LayerPair[];
  zones: readonly ReportZone[];
  boundary: MultiPolygonLonLat;
  /** Ground that stands out and that no number of zones shows. */
  standsOut: MultiPolygonLonLat | null;
  epsg: number;
  cellSizeM: number;
  engineVersion: string;
  seed: number;
  smoothingM: number;
  smallestPatchHa: number;
  borders: 'free' | 'wholeRow' | 'partRow';
  standardise: 'plain' | 'robust';
  principalComponents: boolean;
  /** Names of the blocks it was computed together with. */
  together: readonly string[];
  /** Steps by hand that changed ground or numbers since. */
  handEdits: number;
  /** They begin with zones that were changed by hand in an earlier version. */
  beginsByHand: boolean;
}

export interface ReportLayer {
  layerId: string;
  name: string;
  unit: string;
  decimals: number;
  measuredOn: string | null;
  isContext: boolean;
  /** Codes of classes have no mean. */
  isClass: boolean;
  weight: number;
  advised: number | null;
  /** Who answers for a layer with red findings, and why. */
  override: { by: string; reason: string } | null;
}

export interface ReportZone {
  number: number;
  name: string;
  /** One that people gave it. */
  colour: string | null;
  areaM2: number;
  vines: number;
  missing: number;
  /** Share of its vines, or of its ground without any, that fits another zone nearly as well; null where that was not kept. */
  doubtfulShare: number | null;
  means: readonly { layerId: string; mean: number | null; sd: number | null }[];
  polygonsLonLat: MultiPolygonLonLat;
}
