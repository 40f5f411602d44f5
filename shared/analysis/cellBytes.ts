/**
 * Cells as bytes, for the database and for the browser. Little-endian whatever the machine:
 * 0–3 "CELL", 4 format version 1, 5 type (1 = float32, 2 = uint8), 6–7 zero, 8–11 number of cells, 12… the cells.
 */
import { AnalysisError } from './analysisError.ts';

const MAGIC = [0x43, 0x45, 0x4c, 0x4c] as const;
const VERSION = 1;
const HEADER_BYTES = 12;
const FLOAT32 = 1;
const UINT8 = 2;

/** Bytes of an array of cells. Three float cells take 12 + 12 bytes, three labels 12 + 3. */
export function encodeCells(cells: Float32Array | Uint8Array): Uint8Array {
  const isFloat = cells instanceof Float32Array;
  const bytes = new Uint8Array(HEADER_BYTES + cells.byteLength);
  const view = new DataView(bytes.buffer);
  bytes.set(MAGIC);
  bytes[4] = VERSION;
  bytes[5] = isFloat ? FLOAT32 : UINT8;
  view.setUint32(8, cells.length, true);
  if (isFloat) for (let cell = 0; cell < cells.length; cell++) view.setFloat32(HEADER_BYTES + 4 * cell, cells[cell]!, true);
  else bytes.set(cells, HEADER_BYTES);
  return bytes;
}

/** Float cells from bytes; throws AnalysisError when the bytes are not exactly such an array. */
export function decodeFloatCells(bytes: Uint8Array): Float32Array {
  const { view, count } = checked(bytes, FLOAT32, 4);
  const cells = new Float32Array(count);
  for (let cell = 0; cell < count; cell++) cells[cell] = view.getFloat32(HEADER_BYTES + 4 * cell, true);
  return cells;
}

/** Labels from bytes; throws AnalysisError when the bytes are not exactly such an array. */
export function decodeLabels(bytes: Uint8Array): Uint8Array {
  checked(bytes, UINT8, 1);
  return new Uint8Array(bytes.subarray(HEADER_BYTES));
}

function checked(bytes: Uint8Array, type: number, bytesPerCell: number): { view: DataView; count: number } {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (bytes.length < HEADER_BYTES || MAGIC.some((byte, at) => bytes[at] !== byte)) throw damaged('they do not begin as cells do');
  if (bytes[4] !== VERSION) throw damaged(`format version ${bytes[4]} is not ${VERSION}`);
  if (bytes[5] !== type) throw damaged(`type ${bytes[5]} is not ${type}`);
  const count = view.getUint32(8, true);
  const wanted = HEADER_BYTES + count * bytesPerCell;
  if (bytes.length !== wanted) throw damaged(`${bytes.length} bytes where ${count} cells need ${wanted}`);
  return { view, count };
}

function damaged(reason: string): AnalysisError {
  return new AnalysisError('cells-damaged', `Stored cells cannot be read: ${reason}. Make anew what they belong to: import the layer again, or run the zoning again.`);
}
