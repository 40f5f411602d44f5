import { strToU8, zipSync } from 'fflate';

/** A cell to write: text, a number, a formula with its stored value, or a day (shown by the spreadsheet as a date). */
export type WrittenCell = string | number | null | { formula: string; value: number | null } | { day: string };

/** What a sheet looks like beside its cells: hidden rows and columns from 1, merged areas such as "B1:D1". */
export interface SheetLook {
  readonly hiddenRows?: readonly number[];
  readonly hiddenColumns?: readonly number[];
  readonly merged?: readonly string[];
}

const escaped = (text: string) => text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;');
const letters = (column: number): string => (column < 26 ? '' : letters(Math.floor(column / 26) - 1)) + String.fromCharCode(65 + (column % 26));
const serial = (day: string) => Math.round((Date.parse(`${day}T00:00:00Z`) - Date.UTC(1899, 11, 30)) / 86_400_000);

/** The smallest .xlsx workbook of Office Open XML (ECMA-376) that holds these sheets. */
export function writeXlsx(sheets: Readonly<Record<string, readonly (readonly WrittenCell[])[]>>, looks: Readonly<Record<string, SheetLook>> = {}): Uint8Array<ArrayBuffer> {
  const names = Object.keys(sheets);
  const xml = (body: string) => strToU8(`<?xml version="1.0" encoding="UTF-8" standalone="yes"?>${body}`);
  const main = 'http://schemas.openxmlformats.org/spreadsheetml/2006/main';
  const relations = 'http://schemas.openxmlformats.org/officeDocument/2006/relationships';
  const packed = zipSync({
    '[Content_Types].xml': xml(`<Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types"><Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/><Default Extension="xml" ContentType="application/xml"/><Override PartName="/xl/workbook.xml" ContentType="application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml"/>${names.map((_, at) => `<Override PartName="/xl/worksheets/sheet${at + 1}.xml" ContentType="application/vnd.openxmlformats-officedocument.spreadsheetml.worksheet+xml"/>`).join('')}<Override PartName="/xl/styles.xml" ContentType="application/vnd.openxmlformats-officedocument.spreadsheetml.styles+xml"/></Types>`),
    '_rels/.rels': xml(`<Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships"><Relationship Id="rId1" Type="${relations}/officeDocument" Target="xl/workbook.xml"/></Relationships>`),
    'xl/workbook.xml': xml(`<workbook xmlns="${main}" xmlns:r="${relations}"><sheets>${names.map((name, at) => `<sheet name="${escaped(name)}" sheetId="${at + 1}" r:id="rId${at + 1}"/>`).join('')}</sheets></workbook>`),
    'xl/_rels/workbook.xml.rels': xml(`<Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships">${names.map((_, at) => `<Relationship Id="rId${at + 1}" Type="${relations}/worksheet" Target="worksheets/sheet${at + 1}.xml"/>`).join('')}<Relationship Id="rId${names.length + 1}" Type="${relations}/styles" Target="styles.xml"/></Relationships>`),
    'xl/styles.xml': xml(`<styleSheet xmlns="${main}"><fonts count="1"><font/></fonts><fills count="1"><fill/></fills><borders count="1"><border/></borders><cellStyleXfs count="1"><xf/></cellStyleXfs><cellXfs count="2"><xf numFmtId="0"/><xf numFmtId="14" applyNumberFormat="1"/></cellXfs></styleSheet>`),
    ...Object.fromEntries(names.map((name, at) => [`xl/worksheets/sheet${at + 1}.xml`, xml(`<worksheet xmlns="${main}">${columnsXml(looks[name])}<sheetData>${sheets[name]!.map((cells, row) => rowXml(cells, row, looks[name])).join('')}</sheetData>${mergedXml(looks[name])}</worksheet>`)])),
  });
  return new Uint8Array(packed);
}

function columnsXml({ hiddenColumns = [] }: SheetLook = {}): string {
  return hiddenColumns.length === 0 ? '' : `<cols>${hiddenColumns.map((column) => `<col min="${column}" max="${column}" width="9" hidden="1" customWidth="1"/>`).join('')}</cols>`;
}

function mergedXml({ merged = [] }: SheetLook = {}): string {
  return merged.length === 0 ? '' : `<mergeCells count="${merged.length}">${merged.map((area) => `<mergeCell ref="${area}"/>`).join('')}</mergeCells>`;
}

function rowXml(cells: readonly WrittenCell[], row: number, { hiddenRows = [] }: SheetLook = {}): string {
  return `<row r="${row + 1}"${hiddenRows.includes(row + 1) ? ' hidden="1"' : ''}>${cells.map((cell, column) => cellXml(cell, `${letters(column)}${row + 1}`)).join('')}</row>`;
}

function cellXml(cell: WrittenCell, place: string): string {
  if (cell === null) return '';
  if (typeof cell === 'string') return `<c r="${place}" t="inlineStr"><is><t>${escaped(cell)}</t></is></c>`;
  if (typeof cell === 'number') return `<c r="${place}"><v>${cell}</v></c>`;
  if ('day' in cell) return `<c r="${place}" s="1"><v>${serial(cell.day)}</v></c>`;
  return `<c r="${place}"><f>${escaped(cell.formula)}</f>${cell.value === null ? '' : `<v>${cell.value}</v>`}</c>`;
}
