import { booleanPointInPolygon } from '@turf/turf';
import type { Geometry, MultiPolygon, Position } from 'geojson';
import { importRows, type RowLine } from '../../shared/geo/importedRows.ts';
import type { LonLat, MultiPolygonLonLat } from '../../shared/geo/coordinates.ts';
import { lineBearing, ringMiddle } from '../../shared/geo/rowFrame.ts';
import { storedPieces, type StoredRow } from '../../shared/geo/storedRows.ts';
import { convergenceDeg } from '../../shared/geo/utm.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import { readVectors } from '../importers/vector/readVectors.ts';
import type { SourceFile } from './placed.ts';
import { readOptionsOf } from './sourceFile.ts';

/** A block as rows are laid on it. */
export interface RowBlock {
  id: string;
  boundary: MultiPolygonLonLat;
  epsg: number;
  vineSpacingM: number;
}

/** Surveyed rows of one block in their order across it. */
export interface RowsOnBlock {
  blockId: string;
  rows: StoredRow[];
  /** As the file has them; null where a row has none. */
  labels: (string | null)[];
  rowSpacingM: number;
  rowBearingDeg: number;
}

/**
 * Lines of a file as rows of the blocks in whose outline their middle lies; lines beside all blocks are left out. Throws
 * ImportProblem when no line lies on a block, AnalysisError for a line without length.
 */
export async function rowsOfFile({ source, blocks }: { source: SourceFile; blocks: RowBlock[] }): Promise<RowsOnBlock[]> {
  const understood = await readVectors(source.path, readOptionsOf(source));
  const layer = understood.layers.find((each) => each.name === source.answers.sourceLayer) ?? understood.layers[0];
  const lines = (layer?.featuresLonLat.features ?? []).flatMap(({ geometry, properties }) => linesOf(geometry).map((line): RowLine => ({ line, label: labelOf(properties?.[source.answers.rowLabelField ?? '']) })));
  const found = blocks.flatMap((block) => {
    const area: MultiPolygon = { type: 'MultiPolygon', coordinates: block.boundary as unknown as Position[][][] };
    const own = lines.filter(({ line }) => booleanPointInPolygon(middleOf(line), area));
    return own.length === 0 ? [] : [rowsOn(block, own, source.fileName)];
  });
  if (found.length === 0)
    throw new ImportProblem({
      code: 'not-overlapping',
      fact: `None of its ${lines.length} lines lies on a block.`,
      remedy: 'Check that it is the right file, and that its reference system is the one it names.',
      params: { why: 'lines-elsewhere' },
      file: source.fileName,
    });
  return found;
}

/** Rows of a vineyard stand no closer and no farther apart. */
const spacings = [0.5, 12] as const;

function rowsOn({ id, boundary, epsg, vineSpacingM }: RowBlock, lines: readonly RowLine[], file: string): RowsOnBlock {
  const made = importRows(lines, { vineSpacingM, epsg });
  if (made.rowSpacingM < spacings[0] || made.rowSpacingM > spacings[1]) {
    throw new ImportProblem({
      code: 'bad-geometry',
      fact: `Its lines lie ${made.rowSpacingM.toFixed(1)} m apart; rows of vines lie ${spacings[0]} to ${spacings[1]} m apart.`,
      remedy: 'Send one line for each row.',
      params: { why: 'line-spacing', spacingM: made.rowSpacingM },
      file,
    });
  }
  const convergence = convergenceDeg(ringMiddle(boundary[0]![0]!), epsg);
  return {
    blockId: id,
    rows: made.rows.map((row) => ({ ordinal: row.ordinal, pieces: storedPieces(row, epsg), vineCount: row.vineCount })),
    labels: [...made.importedLabels],
    rowSpacingM: Math.round(made.rowSpacingM * 100) / 100,
    rowBearingDeg: lineBearing(made.frame.gridBearingDeg + convergence),
  };
}

function linesOf(geometry: Geometry): LonLat[][] {
  if (geometry.type === 'LineString') return [geometry.coordinates as unknown as LonLat[]];
  return geometry.type === 'MultiLineString' ? (geometry.coordinates as unknown as LonLat[][]) : [];
}

function labelOf(value: unknown): string | null {
  const text = typeof value === 'string' || typeof value === 'number' ? String(value).trim().slice(0, 20) : '';
  return text === '' ? null : text;
}

/** Half-way between its ends: rows hardly bend. */
function middleOf(line: readonly LonLat[]): [number, number] {
  const [from, to] = [line[0]!, line.at(-1)!];
  return [(from[0] + to[0]) / 2, (from[1] + to[1]) / 2];
}
