import { computed, type ComputedRef, type Ref } from 'vue';
import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import { mainDirection } from '../../shared/geo/mainDirection.ts';
import { rowLabels } from '../../shared/geo/numbering.ts';
import { readOutline, type Outline, type OutlineGeometry } from '../../shared/geo/outline.ts';
import { buildRows, type BlockRows } from '../../shared/geo/rows.ts';
import { storedPieces } from '../../shared/geo/storedRows.ts';
import { countedRows, type CountedRow } from '../lib/stripRows.ts';

/** What of a block decides its rows; numbers may still be missing. */
export interface PlantingDraft {
  readonly rowBearingDeg: number | null;
  readonly rowSpacingM: number | null;
  readonly vineSpacingM: number | null;
  readonly rowCount: number | null;
  readonly headlandM: number | null;
  readonly rowOneSide: 'low' | 'high';
  readonly vineOneEnd: 'start' | 'end';
  readonly firstRowLabel: number | null;
  readonly startPostColour: string;
  readonly endPostColour: string;
}

/** One of the four outermost row ends, from which rows and vines may be counted. */
export interface RowCorner {
  readonly id: `${'low' | 'high'}-${'start' | 'end'}`;
  readonly lonLat: readonly [number, number];
}

export interface RowPreview {
  outline: ComputedRef<Outline | null>;
  /** Why the outline or the facts cannot be used. */
  refusal: ComputedRef<AnalysisError | null>;
  rows: ComputedRef<BlockRows | null>;
  strip: ComputedRef<CountedRow[]>;
  vineTotal: ComputedRef<number>;
  corners: ComputedRef<RowCorner[]>;
  /** Direction in which most of the outline runs, degrees from true north; the first guess for rows. */
  directionDeg: ComputedRef<number | null>;
}

/** Area, rows and vines while somebody draws and types: the same calculation as the server's, in the browser. */
export function useRowPreview(geometry: Ref<OutlineGeometry | null>, draft: Ref<PlantingDraft>): RowPreview {
  const read = computed(() => (geometry.value === null ? { value: null, refusal: null } : attempt(() => readOutline(geometry.value!))));
  const outline = computed(() => read.value.value);
  const laid = computed(() => {
    const { rowBearingDeg, rowSpacingM, vineSpacingM, headlandM, rowCount } = draft.value;
    if (outline.value === null || rowBearingDeg === null || rowSpacingM === null || vineSpacingM === null || headlandM === null) return { value: null, refusal: null };
    const { polygons, epsg } = outline.value;
    return attempt(() => buildRows(polygons, { epsg, bearingDeg: rowBearingDeg, bearingKind: 'true', rowSpacingM, vineSpacingM, headlandM, rowCount }));
  });
  const rows = computed(() => laid.value.value);
  const strip = computed(() => (rows.value === null || outline.value === null || rows.value.rows.length === 0 ? [] : stripOf(rows.value, outline.value, draft.value)));
  return {
    outline,
    refusal: computed(() => read.value.refusal ?? laid.value.refusal),
    rows,
    strip,
    vineTotal: computed(() => rows.value?.rows.reduce((sum, row) => sum + row.vineCount, 0) ?? 0),
    corners: computed(() => (rows.value === null ? [] : cornersOf(rows.value))),
    directionDeg: computed(() => (outline.value === null ? null : mainDirection(outline.value.polygons))),
  };
}

function attempt<Value>(work: () => Value): { value: Value | null; refusal: AnalysisError | null } {
  try {
    return { value: work(), refusal: null };
  } catch (error) {
    if (!(error instanceof AnalysisError)) throw error;
    return { value: null, refusal: error };
  }
}

function stripOf(built: BlockRows, outline: Outline, draft: PlantingDraft): CountedRow[] {
  const firstRowLabel = draft.firstRowLabel ?? 1;
  const labels = rowLabels(built.rows.length, draft.rowOneSide, firstRowLabel);
  const items = built.rows.map((row, at) => ({ id: `row-${at}`, ordinal: row.ordinal, label: String(labels[at]), labelWas: null, vineCount: row.vineCount, vines: [], pieces: storedPieces(row, built.epsg) as never }));
  const block = { boundary: { coordinates: outline.polygons }, epsg: built.epsg, rowBearingDeg: draft.rowBearingDeg ?? 0, startPostColour: draft.startPostColour, endPostColour: draft.endPostColour };
  return countedRows(block, { items, numbering: { rowOneSide: draft.rowOneSide, vineOneEnd: draft.vineOneEnd, firstRowLabel } });
}

/** The four outermost row ends. */
function cornersOf({ rows }: BlockRows): RowCorner[] {
  const [low, high] = [rows[0], rows.at(-1)];
  if (!low || !high) return [];
  const at = ([lon, lat]: readonly [number, number]) => [lon, lat] as const;
  return [
    { id: 'low-start', lonLat: at(low.pieces[0]!.from) },
    { id: 'low-end', lonLat: at(low.pieces.at(-1)!.to) },
    { id: 'high-start', lonLat: at(high.pieces[0]!.from) },
    { id: 'high-end', lonLat: at(high.pieces.at(-1)!.to) },
  ];
}
