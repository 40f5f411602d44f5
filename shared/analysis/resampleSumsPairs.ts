/**
 * Sums of two bands of one picture with 16 bits a sample, as cameras for red and near infrared write them, in WebAssembly:
 * the loop that all pixels of the largest pictures go through. Whole numbers, so the sums are those of any other order.
 */
import type { CentreTables } from './resampleSumsCentre.ts';
import type { SumTable, TilePart } from './resampleSums.ts';
import { addInt, both, get, int, ints, loadInt, loadShort, localsOf, set, storeFloat, timesInt, toFloat, unequal, upTo, wasmModule, when, type Code, type WasmFunction } from './wasmCode.ts';

/** Pixels of a run that 32 bits can hold the sum of. */
const MOST_PIXELS = 65536;
const PAGE = 65536;
const BYTES = 2;

/** False, with nothing added, for pixels of any other kind. */
export function addPairs(sums: SumTable, { tile, noData, fromCol, toCol, fromRow, toRow }: TilePart, { window, colOf, runEnd, rowOf }: CentreTables): boolean {
  const [one, two] = tile.bands;
  if (sums.bands !== 2 || !one || !two || one.values !== two.values || !(one.values instanceof Uint16Array) || one.stride !== two.stride) return false;
  const runs = runsBetween(fromCol - window.firstCol, toCol - window.firstCol, runEnd);
  const step = BYTES * one.stride;
  const line = step * tile.storedCols;
  const first = (fromRow - tile.firstRow) * tile.storedCols * one.stride;
  const end = Math.min(one.values.length, (toRow - tile.firstRow) * tile.storedCols * one.stride);
  if (end <= first || Math.max(...runs) * (toRow - fromRow) > MOST_PIXELS) return false;
  const samples = one.values.subarray(first, end);
  const runsAt = Math.ceil(samples.byteLength / 8) * 8;
  const sumsAt = runsAt + 8 * runs.length;
  const { memory, sumRuns } = memoryOf(sumsAt + 24 * runs.length);
  new Uint16Array(memory.buffer, 0, samples.length).set(samples);
  new Int32Array(memory.buffer, runsAt, runs.length).set(runs);
  const found = new Float64Array(memory.buffer, sumsAt, 3 * runs.length);
  const count = sums.cols * sums.rows;
  for (let row = fromRow; row < toRow; ) {
    const cellRow = rowOf[row - window.firstRow]!;
    const from = row;
    while (row < toRow && rowOf[row - window.firstRow] === cellRow) row++;
    if (cellRow < 0) continue;
    const start = (from - fromRow) * line + (fromCol - tile.firstCol) * step;
    sumRuns(start + BYTES * one.offset, start + BYTES * two.offset, step, line, row - from, runsAt, runs.length, storable(noData[0]!), storable(noData[1]!), sumsAt);
    for (let run = 0, col = fromCol - window.firstCol; run < runs.length; col += runs[run++]!) {
      if (colOf[col]! < 0) continue;
      const cell = cellRow * sums.cols + colOf[col]!;
      sums.values[cell]! += found[3 * run]!;
      sums.values[count + cell]! += found[3 * run + 1]!;
      sums.values[2 * count + cell]! += found[3 * run + 2]!;
    }
  }
  return true;
}

/** Pixels in each column of cells. */
function runsBetween(from: number, to: number, runEnd: Int32Array): number[] {
  const runs: number[] = [];
  for (let at = from; at < to; at = runEnd[at]!) runs.push(Math.min(to, runEnd[at]!) - at);
  return runs;
}

/** What no sample equals stays unequal as a whole number too. */
function storable(value: number): number {
  return Number.isInteger(value) && value >= 0 && value < 65536 ? value : -1;
}

interface Summing {
  readonly memory: WebAssembly.Memory;
  /**
   * Sums of both bands and number of pixels of each run of pixels, over `rows` lines: three doubles a run at `into`. A pixel
   * without data in either band counts in none.
   */
  sumRuns(one: number, two: number, step: number, line: number, rows: number, runs: number, count: number, missingOne: number, missingTwo: number, into: number): void;
}

let summing: Summing | undefined;

function memoryOf(bytes: number): Summing {
  summing ??= new WebAssembly.Instance(new WebAssembly.Module(wasmModule([sumRuns()]))).exports as unknown as Summing;
  const missing = bytes - summing.memory.buffer.byteLength;
  if (missing > 0) summing.memory.grow(Math.ceil(missing / PAGE));
  return summing;
}

function sumRuns(): WasmFunction {
  const parameters = ints('one', 'two', 'step', 'line', 'rows', 'runs', 'count', 'missingOne', 'missingTwo', 'into');
  const own = ints('run', 'row', 'across', 'lineOne', 'lineTwo', 'atOne', 'atTwo', 'end', 'a', 'b', 'sumOne', 'sumTwo', 'pixels');
  const { one, two, step, line, rows, runs, count, missingOne, missingTwo, into, run, row, across, lineOne, lineTwo, atOne, atTwo, end, a, b, sumOne, sumTwo, pixels } = localsOf(parameters, own);
  const forward = (local: number, by: Code): Code => set(local, addInt(get(local), by));
  const pixel = [
    set(a, loadShort(get(atOne))),
    set(b, loadShort(get(atTwo))),
    when(both(unequal(get(a), get(missingOne)), unequal(get(b), get(missingTwo))), [forward(sumOne, get(a)), forward(sumTwo, get(b)), forward(pixels, int(1))]),
    forward(atTwo, get(step)),
  ];
  const oneLine = [set(atOne, get(lineOne)), set(atTwo, get(lineTwo)), set(end, addInt(get(lineOne), get(across))), upTo(atOne, get(end), pixel, get(step)), forward(lineOne, get(line)), forward(lineTwo, get(line))];
  const oneRun = [
    set(across, timesInt(loadInt(get(runs)), get(step))),
    set(lineOne, get(one)),
    set(lineTwo, get(two)),
    [sumOne, sumTwo, pixels, row].map((each) => set(each, int(0))),
    upTo(row, get(rows), oneLine),
    [sumOne, sumTwo, pixels].map((each, at) => storeFloat(addInt(get(into), int(8 * at)), toFloat(get(each)))),
    forward(one, get(across)),
    forward(two, get(across)),
    forward(runs, int(4)),
    forward(into, int(24)),
  ];
  return { name: 'sumRuns', parameters, own, result: null, body: upTo(run, get(count), oneRun) };
}
