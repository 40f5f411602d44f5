import readXlsxFile from 'read-excel-file/node';
import type { RawCell, RawSheet } from '../../../shared/lab/file/labFile.ts';
import { checkEntries, readEntries } from '../archive/zipDirectory.ts';
import type { ByteSource } from '../byteSource.ts';
import { ImportProblem } from '../importProblem.ts';
import { labLimits } from './labLimits.ts';
import { sheetMarks } from './sheetMarks.ts';

/** Sheets of an .xlsx workbook; formulas give the values that were stored with them. The archive is judged before anything is unpacked. */
export async function readWorkbook(bytes: Uint8Array<ArrayBuffer>): Promise<RawSheet[]> {
  const entries = readEntries(inMemory(bytes));
  checkEntries(entries, bytes.length);
  const unpacked = entries.reduce((sum, entry) => sum + entry.bytes, 0);
  if (unpacked > labLimits.unpackedBytes)
    throw new ImportProblem({
      code: 'too-large',
      fact: `It would unpack to ${Math.round(unpacked / 1e6)} MB; ${labLimits.unpackedBytes / 1e6} MB is the most.`,
      remedy: 'Send the table alone, without pictures and other sheets.',
    });
  if (!entries.some(({ name }) => name === 'xl/workbook.xml')) throw new ImportProblem({ code: 'wrong-type', fact: 'It is an archive, but no .xlsx workbook.', remedy: 'Send the table itself as XLSX or CSV.' });
  const sheets = await readXlsxFile(Buffer.from(bytes));
  if (sheets.length > labLimits.sheets) throw new ImportProblem({ code: 'too-large', fact: `It has ${sheets.length} sheets; ${labLimits.sheets} is the most.`, remedy: 'Send the sheet with the results alone.' });
  const marks = sheetMarks(bytes);
  return sheets.map(({ sheet, data }) => ({ name: sheet, rows: data.map((row) => row.map(cellOf)), ...marks.get(sheet) }));
}

function cellOf(cell: unknown): RawCell {
  if (cell instanceof Date) return Number.isNaN(cell.getTime()) ? null : { date: cell.toISOString().slice(0, 10) };
  if (typeof cell === 'string') return cell.trim() === '' ? null : cell.trim();
  return typeof cell === 'number' || typeof cell === 'boolean' ? cell : null;
}

function inMemory(bytes: Uint8Array<ArrayBuffer>): ByteSource {
  return {
    size: bytes.length,
    read(offset, length) {
      if (offset < 0 || length < 0 || offset + length > bytes.length) throw new ImportProblem({ code: 'truncated', fact: 'The end of the file is missing.', remedy: 'Copy or download it again.' });
      return bytes.slice(offset, offset + length);
    },
    close: () => undefined,
  };
}
