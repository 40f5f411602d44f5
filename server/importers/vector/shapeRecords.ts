import { ImportProblem } from '../importProblem.ts';

/*
 * The records of a .shp file, checked before the library parses them: it trusts every count in the file.
 * Layout: ESRI Shapefile Technical Description, July 1998. Lengths are in 16-bit words, big-endian; shapes little-endian.
 */

const kindNames: Readonly<Record<number, string>> = { 1: 'points', 3: 'lines', 5: 'polygons', 8: 'point groups', 11: 'points', 13: 'lines', 15: 'polygons', 18: 'point groups', 21: 'points', 23: 'lines', 25: 'polygons', 28: 'point groups' };

export interface ShapeRecords {
  /** The file with only records that hold together; damaged ones became empty. */
  bytes: Uint8Array<ArrayBuffer>;
  count: number;
  damaged: number;
  /** The file ends before its header says. */
  isCutOff: boolean;
}

/** Throws `wrong-type`, `truncated` or `unsupported-encoding`. */
export function checkShapeRecords(input: Uint8Array): ShapeRecords {
  if (input.length < 100) throw new ImportProblem({ code: 'truncated', fact: `Its .shp part has ${input.length} bytes; a shapefile has at least 100.`, remedy: 'Export the layer again.', params: { size: input.length } });
  const bytes = new Uint8Array(input);
  const view = new DataView(bytes.buffer);
  if (view.getInt32(0) !== 9994) throw new ImportProblem({ code: 'wrong-type', fact: 'Its .shp part is not a shapefile.', remedy: 'Export the layer again as a shapefile.' });
  const kind = view.getInt32(32, true);
  if (kind === 31) throw new ImportProblem({ code: 'unsupported-encoding', fact: 'It holds three-dimensional patches instead of outlines.', remedy: 'Export the layer as polygons.' });
  if (kind !== 0 && kindNames[kind] === undefined) throw new ImportProblem({ code: 'damaged', fact: `Its shapes have the unknown kind ${kind}.`, remedy: 'Export the layer again.', params: { kind } });
  const end = Math.min(bytes.length, view.getInt32(24) * 2 > 100 ? view.getInt32(24) * 2 : bytes.length);
  let count = 0;
  let damaged = 0;
  let at = 100;
  while (at + 12 <= end) {
    const length = view.getInt32(at + 4) * 2;
    if (length < 4 || at + 8 + length > bytes.length) break;
    count++;
    if (!holdsTogether(view, { at: at + 8, length, kind })) {
      damaged++;
      view.setInt32(at + 8, 0, true);
    }
    at += 8 + length;
  }
  return { bytes: bytes.slice(0, at), count, damaged, isCutOff: at < end };
}

interface RecordPlace {
  at: number;
  length: number;
  kind: number;
}

/** Counts inside a record agree with its length, and parts begin in order. */
function holdsTogether(view: DataView, { at, length, kind }: RecordPlace): boolean {
  const own = view.getInt32(at, true);
  if (own === 0) return true;
  if (own !== kind) return false;
  const plain = kind % 10;
  if (plain === 1) return length >= (kind === 11 ? 28 : 20);
  const heights = kind > 10 && kind < 20 ? 8 : 0;
  if (plain === 8) {
    if (length < 40) return false;
    const points = view.getInt32(at + 36, true);
    return points > 0 && 40 + points * 16 + (heights === 0 ? 0 : 16 + points * heights) <= length;
  }
  if (length < 44) return false;
  const parts = view.getInt32(at + 36, true);
  const points = view.getInt32(at + 40, true);
  if (parts < 1 || points < 1 || 44 + parts * 4 + points * 16 + (heights === 0 ? 0 : 16 + points * heights) > length) return false;
  for (let part = 0, last = -1; part < parts; part++) {
    const start = view.getInt32(at + 44 + part * 4, true);
    if (start <= last || start >= points || (part === 0 && start !== 0)) return false;
    last = start;
  }
  return true;
}
