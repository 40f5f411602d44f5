import initSqlJs, { type Database, type SqlValue } from 'sql.js';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';

/** Opens the bytes of an SQLite file in memory, in WebAssembly: what goes wrong in it stays there. Throws ImportProblem. */
export async function openDatabaseFile(bytes: Uint8Array): Promise<Database> {
  if (bytes.length > limits.databaseBytes)
    throw new ImportProblem({
      code: 'too-large',
      fact: `It has ${Math.round(bytes.length / 2 ** 20)} MB; ${limits.databaseBytes / 2 ** 20} MB is the most for a database.`,
      remedy: 'Export only the layers of the estate.',
      params: { megabytes: Math.round(bytes.length / 2 ** 20) },
    });
  requireWhole(bytes);
  const { Database: Open } = await initSqlJs();
  return new Open(withoutJournal(bytes));
}

/** The header says how many pages of which size there are (big-endian words at 28 and 16). */
function requireWhole(bytes: Uint8Array): void {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const truncated = (needed: number) =>
    new ImportProblem({
      code: 'truncated',
      fact: `The file ends too early: ${needed} bytes are needed and it has ${bytes.length}.`,
      remedy: 'Copy or export it again; the transfer was probably cut off.',
      params: { needed, size: bytes.length },
    });
  if (bytes.length < 100) throw truncated(100);
  const pageBytes = view.getUint16(16) === 1 ? 65_536 : view.getUint16(16);
  if (pageBytes < 512 || (pageBytes & (pageBytes - 1)) !== 0)
    throw new ImportProblem({
      code: 'damaged',
      fact: `The head of the database in it is damaged (pages of ${pageBytes} bytes).`,
      remedy: 'Export the layer again, or copy the file again.',
      params: { pageBytes },
    });
  const pages = view.getUint32(28);
  // The count is only true when the two change counters agree.
  if (pages > 0 && view.getUint32(24) === view.getUint32(92) && pages * pageBytes > bytes.length) throw truncated(pages * pageBytes);
}

/** A database that was written with a journal beside it says so in bytes 18 and 19, and then wants the journal, which was not sent. */
function withoutJournal(bytes: Uint8Array): Uint8Array {
  if (bytes[18] !== 2 && bytes[19] !== 2) return bytes;
  const plain = bytes.slice();
  plain.fill(1, 18, 20);
  return plain;
}

/** Rows of a query as arrays. Whatever the database finds wrong with itself is damage of the file. */
export function rowsOf(database: Database, query: string): SqlValue[][] {
  try {
    return database.exec(query)[0]?.values ?? [];
  } catch (error) {
    throw new ImportProblem({ code: 'damaged', fact: `The database in it is damaged (${error instanceof Error ? error.message.slice(0, 120) : 'unknown error'}).`, remedy: 'Export the layer again, or copy the file again.', cause: error });
  }
}

/** Columns that are stored; computed ones would run what their author wrote. */
export function tableColumns(database: Database, table: string): string[] {
  const columns = rowsOf(database, `select name, hidden from pragma_table_xinfo('${table.replaceAll("'", "''")}')`).filter(([, hidden]) => hidden === 0).map(([name]) => String(name));
  if (columns.length > limits.fields)
    throw new ImportProblem({
      code: 'too-large',
      fact: `Its layer has ${columns.length} columns; ${limits.fields} is the most.`,
      remedy: 'Export only the columns that are needed.',
      params: { columns: columns.length },
    });
  return columns;
}
