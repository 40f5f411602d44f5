import Papa from 'papaparse';
import type { RawCell, RawLabFile } from '../../../shared/lab/file/labFile.ts';
import { openFile } from '../byteSource.ts';
import { ImportProblem, naming } from '../importProblem.ts';
import { decodeText } from '../textEncoding.ts';
import { labLimits } from './labLimits.ts';
import { readWorkbook } from './readWorkbook.ts';

/** What a table is for: how many rows it may have, and what to do about more. */
export type TableUse = 'lab' | 'earlier';

/** A table as rows of cells: a spreadsheet, or text divided by semicolons, tabs, commas or bars. Throws ImportProblem. */
export function readLabFile({ path, fileName, use = 'lab' }: { path: string; fileName: string; use?: TableUse }): Promise<RawLabFile> {
  return naming(fileName, () => {
    const source = openFile(path);
    try {
      if (source.size === 0) throw new ImportProblem({ code: 'empty', fact: 'It is empty.', remedy: 'Export the results again.' });
      if (source.size > labLimits.bytes)
        throw new ImportProblem({
          code: 'too-large',
          fact: `It has ${Math.ceil(source.size / 1e6)} MB; ${labLimits.bytes / 1e6} MB is the most for a table of results.`,
          remedy: 'Send the table alone, without pictures.',
        });
      return readLabBytes(source.read(0, source.size), use);
    } finally {
      source.close();
    }
  });
}

/** By content, never by the name: a file called .csv may be a spreadsheet. */
export async function readLabBytes(bytes: Uint8Array<ArrayBuffer>, use: TableUse = 'lab'): Promise<RawLabFile> {
  const begins = (...signs: number[]) => signs.every((sign, at) => bytes[at] === sign);
  if (begins(0x50, 0x4b)) return limited({ kind: 'spreadsheet', encoding: null, separator: null, sheets: await readWorkbook(bytes) }, use);
  if (begins(0xd0, 0xcf, 0x11, 0xe0)) throw new ImportProblem({ code: 'wrong-type', fact: 'It is a spreadsheet of the old .xls form, or one with a password, which is not read.', remedy: 'Save it as .xlsx without a password, or as CSV.' });
  if (begins(0x25, 0x50, 0x44, 0x46)) throw new ImportProblem({ code: 'wrong-type', fact: 'It is a PDF; figures cannot be read from it safely.', remedy: 'Ask the laboratory for a table (CSV or XLSX), or type the results in.' });
  const { text, encoding } = decodeText(bytes);
  if (text.includes('\u0000')) throw new ImportProblem({ code: 'wrong-type', fact: 'It is no table of text.', remedy: 'Send CSV, TSV or XLSX.' });
  if (/^\s*<(!doctype|html|table|\?xml)/i.test(text)) throw new ImportProblem({ code: 'wrong-type', fact: 'It is a web page under the name of a table.', remedy: 'Open it in a spreadsheet and save it as .xlsx or CSV.' });
  return limited(readText(text.replace(/^\uFEFF/, ''), encoding), use);
}

function readText(text: string, encoding: string): RawLabFile {
  // Some spreadsheets write the divider into a first line of their own.
  const told = /^sep=(.)\r?\n/i.exec(text);
  const body = told ? text.slice(told[0].length) : text;
  const separator = told?.[1] ?? findSeparator(body);
  const parsed = Papa.parse<string[]>(body, { delimiter: separator, skipEmptyLines: false, transform: (cell) => cell.trim() });
  const quotes = parsed.errors.find(({ type }) => type === 'Quotes');
  if (quotes) throw new ImportProblem({ code: 'damaged', fact: `A quotation mark that opens in row ${(quotes.row ?? 0) + 1} is never closed.`, remedy: 'Correct that row, or export the table again.', params: { row: (quotes.row ?? 0) + 1 } });
  const rows = parsed.data.map((row): RawCell[] => row.map((cell) => (cell === '' ? null : cell)));
  return { kind: 'text', encoding, separator, sheets: [{ name: '', rows: told ? [[], ...rows] : rows }] };
}

/** The divider that cuts most lines into the same number of cells; tabs and semicolons go before commas, which numbers hold too. */
function findSeparator(text: string): string {
  const lines = text.split(/\r\n|\n|\r/).filter((line) => line.trim() !== '').slice(0, 80).map((line) => line.replace(/"[^"]*"/g, ''));
  const scored = ['\t', ';', '|', ','].map((sign, place) => {
    const counts = lines.map((line) => line.split(sign).length - 1).filter((count) => count > 0);
    const times = new Map<number, number>();
    for (const count of counts) times.set(count, (times.get(count) ?? 0) + 1);
    const steady = Math.max(0, ...times.values()) / Math.max(1, lines.length);
    return { sign, score: steady - place * 0.05 };
  });
  const best = scored.reduce((one, other) => (other.score > one.score ? other : one));
  return best.score <= 0 ? ';' : best.sign;
}

function limited(file: RawLabFile, use: TableUse): RawLabFile {
  const most = use === 'lab' ? labLimits.rows : labLimits.earlierRows;
  const rows = file.sheets.reduce((sum, sheet) => sum + sheet.rows.length, 0);
  const columns = Math.max(0, ...file.sheets.flatMap((sheet) => sheet.rows.map((row) => row.length)));
  if (rows > most) throw new ImportProblem({ code: 'too-large', fact: `It has ${rows} rows; ${most} is the most.`, remedy: use === 'lab' ? 'Send the results of one delivery at a time.' : 'Divide it, such as into one file a season.' });
  if (columns > labLimits.columns) throw new ImportProblem({ code: 'too-large', fact: `It has ${columns} columns; ${labLimits.columns} is the most.`, remedy: 'Keep only the columns that are needed.' });
  if (file.sheets.every((sheet) => sheet.rows.every((row) => row.every((cell) => cell === null)))) throw new ImportProblem({ code: 'empty', fact: 'It has no rows.', remedy: 'Export the results again.' });
  return file;
}
