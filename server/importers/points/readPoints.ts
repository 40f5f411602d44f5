import { namesRowsAndVines } from '../../../shared/earlier/columns.ts';
import type { LonLat } from '../../../shared/geo/coordinates.ts';
import { withSource } from '../byteSource.ts';
import { ImportProblem, naming } from '../importProblem.ts';
import { looksLikeDegrees, referenceQuestion } from '../reference/candidates.ts';
import { axesQuestion } from '../reference/axesQuestion.ts';
import { evenly, withSample } from '../reference/ghostSample.ts';
import { checkPlacement } from '../reference/placement.ts';
import { datumWarning, referenceFromAnswer, referenceFromEpsg, toLonLat } from '../reference/referenceSystem.ts';
import { sniffFormat } from '../sniffFormat.ts';
import { decodeText, type DecodedText } from '../textEncoding.ts';
import type { ImportQuestion, ImportWarning, PointsUnderstood, ReadOptions, ReferenceSystem } from '../understood.ts';
import { describeField } from '../describeFields.ts';
import { cellNumber, findDecimalMark, type DecimalMark } from '../../../shared/importing/cellNumbers.ts';
import { collectColumns } from './collectColumns.ts';
import { parseTable, type ParsedTable } from './parseTable.ts';
import { findPositionColumns, type PositionColumns } from '../../../shared/importing/positionColumns.ts';
import { withWktPoints } from './wktPoints.ts';
import { readPositions, type PositionReading } from './readPositions.ts';

/** A table of points: conductivity readings, old samples. Rows without a usable position are set aside by reason. Throws ImportProblem. */
export function readPoints(input: string | Uint8Array, options: ReadOptions): Promise<PointsUnderstood> {
  return naming(options.fileName, () => withSource(input, async (source) => understand(decode(source.read(0, source.size), options.fileName), options)));
}

function decode(bytes: Uint8Array, fileName: string): DecodedText {
  const { format, foreignName } = sniffFormat(bytes.subarray(0, 4096), fileName);
  if (format === 'empty') throw new ImportProblem({ code: 'empty', fact: 'The file is empty.', remedy: 'Export or copy it again.' });
  if (format === 'table') return decodeText(bytes);
  const found = foreignName ?? { zip: 'an archive or a spreadsheet', geotiff: 'a raster picture', geopackage: 'a database' }[format as 'zip'] ?? `a ${format} file`;
  throw new ImportProblem({ code: 'wrong-type', fact: `It is ${found}, not a table of points.`, remedy: 'Save the table as CSV.', params: { found } });
}

function understand({ text, encoding }: DecodedText, options: ReadOptions): PointsUnderstood {
  const table = withWktPoints(parseTable(text));
  if (table.rows.length === 0) throw new ImportProblem({ code: 'empty', fact: 'It names its columns and has no rows below them.', remedy: 'Export the table again, with its readings.', params: { why: 'no-rows' } });
  const questions: ImportQuestion[] = [];
  const warnings: ImportWarning[] = [...table.warnings];
  if (encoding !== 'UTF-8') warnings.push({ code: 'encoding', text: `Its letters are read as ${encoding}. Check names with accents.`, params: { encoding } });
  const { mark, unsure } = findDecimalMark(sampleCells(table), table.separator);
  if (unsure) questions.push({ code: 'decimal-mark', text: `Are numbers such as ${firstWithComma(table)} decimals or thousands?`, choices: [{ value: ',', label: 'Decimals' }, { value: '.', label: 'Thousands' }] });
  const decimalMark = options.answers?.decimalMark ?? mark;
  const columns = findPositionColumns(table.names, options.answers);
  const base = { kind: 'points' as const, separator: table.separator, decimalMark, encoding, hasHeader: table.hasHeader };
  if (columns === null) {
    const shapes = table.names.find((_, i) => table.rows.slice(0, 20).some((row) => /^(srid=\d+;)?(multi)?(point|linestring|polygon)\s*z?m?\s*\(/i.test(row[i] ?? '')));
    if (shapes !== undefined)
      throw new ImportProblem({
        code: 'no-coordinates',
        fact: `Its places are written as text (WKT) in the column "${shapes}".`,
        remedy: 'Export it as GeoJSON or GeoPackage, or with a column each for X and Y.',
        params: { why: 'places-as-text', column: shapes },
      });
    const isReadings = namesRowsAndVines(table.names);
    if (isReadings) warnings.push({ code: 'rows-and-vines', text: 'It tells vines by row and number: readings of vines come in under "Earlier readings".' });
    const choices = numericColumns(table, decimalMark).map((name) => ({ value: name, label: name }));
    if (choices.length < 2)
      throw new ImportProblem({
        code: 'no-coordinates',
        fact: `None of its columns holds positions (it has ${table.names.slice(0, 6).join(', ').slice(0, 120)}).`,
        remedy: isReadings
          ? 'Readings by row and vine come in under "Earlier readings"; a layer needs columns with latitude and longitude, or easting and northing.'
          : 'Add columns with latitude and longitude, or easting and northing.',
      });
    questions.push({ code: 'columns', text: 'Which columns hold longitude (or easting) and latitude (or northing)?', choices });
    return { ...base, columns: describe(table, table.rows), position: null, reference: null, epsg: null, count: table.rows.length, pointsLonLat: [], rowNumbers: [], numbers: new Map(), texts: new Map(), setAside: [], questions, warnings };
  }
  const positions = readPositions(table, columns, { mark: decimalMark, swap: options.answers?.swapAxes === true });
  warnings.push(...positions.warnings);
  if (positions.kept.length === 0)
    throw new ImportProblem({
      code: 'no-coordinates',
      fact: `No row has a usable position in the columns "${table.names[columns.x]}" and "${table.names[columns.y]}".`,
      remedy: 'Check the columns, or export the table with decimal degrees.',
      params: { why: 'no-position-in', x: table.names[columns.x]!, y: table.names[columns.y]! },
    });
  const placed = place(positions, columns, options);
  const sample = evenly(positions.kept.map((_, i): [number, number] => [positions.x[i]!, positions.y[i]!]));
  const kept = positions.kept.filter((_, i) => placed.lonLat[i] !== null);
  const collected = collectColumns(table, kept, { mark: decimalMark, skip: [columns.x, columns.y] });
  warnings.push(...placed.warnings, ...collected.warnings);
  questions.push(...withSample(placed.questions, sample, placed.named));
  return {
    ...base,
    // Decimal commas, units in cells and a few words among numbers leave a column one of numbers.
    columns: describe(
      table,
      kept.slice(0, 5000).map((row) => table.rows[row]!),
    ).map((column) =>
      collected.numbers.has(column.name)
        ? { ...column, kind: 'number' as const }
        : column.kind === 'number' && collected.texts.has(column.name)
          ? { ...column, kind: 'text' as const }
          : column,
    ),
    position: { first: table.names[columns.x]!, second: table.names[columns.y]!, frame: placed.frame },
    reference: placed.reference,
    epsg: placed.reference?.epsg ?? null,
    count: placed.reference === null ? positions.kept.length : kept.length,
    pointsLonLat: placed.lonLat.filter((position) => position !== null),
    rowNumbers: kept.map((row) => table.rowNumbers[row]!),
    numbers: collected.numbers,
    texts: collected.texts,
    setAside: positions.setAside,
    questions,
    warnings,
  };
}

interface Placed {
  frame: 'lonlat' | 'projected';
  reference: ReferenceSystem | null;
  /** The system before it was found not to fit. */
  named: ReferenceSystem | null;
  /** One entry per kept row; null while the reference system is not known. */
  lonLat: (LonLat | null)[];
  questions: ImportQuestion[];
  warnings: ImportWarning[];
}

function place({ kept, x, y }: PositionReading, columns: PositionColumns, options: ReadOptions): Placed {
  const box = boxOf(kept.length, x, y);
  const degrees = looksLikeDegrees(box) || (columns.frame === 'lonlat' && box.every(([a, b]) => Math.abs(a) <= 180 && Math.abs(b) <= 180));
  const questions: ImportQuestion[] = [];
  const warnings: ImportWarning[] = [];
  const reference = options.answers?.epsg !== undefined ? referenceFromAnswer(options.answers.epsg) : degrees ? referenceFromEpsg(4326, 'format') : null;
  const frame = reference?.unitM === null ? 'lonlat' : 'projected';
  if (reference === null) {
    questions.push(referenceQuestion(box, options.estateLonLat ?? null, { code: 'table-projection', text: 'Its positions are in a map projection that the table does not name.' }));
    return { frame, reference, named: null, lonLat: kept.map(() => null), questions, warnings };
  }
  if (columns.frame === 'projected' && frame === 'lonlat' && options.answers?.epsg === undefined)
    warnings.push({
      code: 'degrees-assumed',
      text: 'Its positions are small enough to be degrees and are read as longitude and latitude (WGS 84). Check them on the map.',
    });
  const swapped = axesQuestion(box, reference, options);
  const placement = checkPlacement(box, reference, options);
  questions.push(...(swapped === null ? placement.questions : [swapped]));
  const datum = datumWarning(reference);
  warnings.push(...placement.warnings, ...(datum === null ? [] : [datum]));
  if (placement.outlineLonLat === null) return { frame, reference: null, named: reference, lonLat: kept.map(() => null), questions, warnings };
  const convert = toLonLat(reference);
  return { frame, reference, named: reference, lonLat: kept.map((_, i) => convert([x[i]!, y[i]!])), questions, warnings };
}

function boxOf(count: number, x: Float64Array, y: Float64Array): [number, number][] {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (let i = 0; i < count; i++) {
    west = Math.min(west, x[i]!);
    east = Math.max(east, x[i]!);
    south = Math.min(south, y[i]!);
    north = Math.max(north, y[i]!);
  }
  return [[west, south], [east, south], [east, north], [west, north], [west, south]];
}

function* sampleCells(table: ParsedTable): Generator<string> {
  for (const row of table.rows.slice(0, 2000)) yield* row;
}

function firstWithComma(table: ParsedTable): string {
  return table.rows.flat().find((cell) => /^\d+,\d+$/.test(cell)) ?? '1,234';
}

function numericColumns(table: ParsedTable, mark: DecimalMark): string[] {
  const rows = table.rows.slice(0, 200);
  return table.names.filter((_, i) => rows.filter((row) => !Number.isNaN(cellNumber(row[i] ?? '', mark).value)).length > rows.length / 2);
}

/** The first rows are enough to tell what a column holds. */
function describe(table: ParsedTable, rows: readonly (readonly string[])[]) {
  const head = rows.slice(0, 5000);
  return table.names.map((name, i) => describeField(name, head.map((row) => row[i] ?? '')));
}
