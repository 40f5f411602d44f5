/**
 * Running sums along rows of 16-bit samples in WebAssembly, eight samples at a time (prefix sums by doubling: Hillis & Steele
 * 1986, "Data parallel algorithms"). Sums wrap at 16 bits, as differences did when the picture was written.
 */
import { addInt, addShorts, get, int, ints, loadVector, localsOf, pickBytes, set, storeVector, upTo, vectors, wasmModule, zeroVector, type WasmFunction } from '../../../shared/analysis/wasmCode.ts';

const PAGE = 65536;
/** Bytes that the loop works on at a time; they stay in the fastest memory of most processors. */
const PIECE = 2 * PAGE;
const AT_ONCE = 8;
const BYTES = 2;
const STRIDES = [1, 2, 4] as const;

/** False, with nothing added, for rows or bands that do not come out even in eight samples. */
export function addAlongRows(samples: Uint16Array, samplesPerRow: number, stride: number): boolean {
  kernels ??= prepared();
  const kernel = kernels.get(stride);
  if (kernel === undefined || samplesPerRow % AT_ONCE !== 0 || samples.length % samplesPerRow !== 0) return false;
  // Some rows at a time, so that a strip as large as its picture is not held twice.
  const piece = samplesPerRow * Math.max(1, Math.floor(PIECE / (BYTES * samplesPerRow)));
  const missing = BYTES * Math.min(piece, samples.length) - kernel.memory.buffer.byteLength;
  if (missing > 0) kernel.memory.grow(Math.ceil(missing / PAGE));
  for (let from = 0; from < samples.length; from += piece) {
    const rows = samples.subarray(from, from + piece);
    const worked = new Uint16Array(kernel.memory.buffer, 0, rows.length);
    worked.set(rows);
    kernel.add(rows.byteLength, BYTES * samplesPerRow);
    rows.set(worked);
  }
  return true;
}

interface Kernel {
  readonly memory: WebAssembly.Memory;
  /** Replaces the differences in the first `end` bytes, `line` bytes a row, by their running sums. */
  readonly add: (end: number, line: number) => void;
}

let kernels: ReadonlyMap<number, Kernel> | undefined;

/** One for each number of bands; none on a processor without vector instructions. */
function prepared(): ReadonlyMap<number, Kernel> {
  const code = wasmModule(STRIDES.map(sumsOf));
  if (!WebAssembly.validate(code)) return new Map();
  const { memory, ...sums } = new WebAssembly.Instance(new WebAssembly.Module(code)).exports as Record<string, unknown> & { memory: WebAssembly.Memory };
  return new Map(STRIDES.map((stride) => [stride, { memory, add: sums[nameOf(stride)] as Kernel['add'] }]));
}

const nameOf = (stride: number): string => `sums${stride}`;

function sumsOf(stride: number): WasmFunction {
  const parameters = ints('end', 'line');
  const own = { ...ints('row', 'at', 'rowEnd'), ...vectors('eight', 'before') };
  const { end, line, row, at, rowEnd, eight, before } = localsOf(parameters, own);
  const byBytes = (place: (sample: number) => number) => Array.from({ length: 16 }, (_, byte) => BYTES * place(byte >> 1) + (byte & 1));
  const shifts = [1, 2, 4].map((times) => times * stride).filter((shift) => shift < AT_ONCE);
  const step = [
    set(eight, loadVector(get(at))),
    // Each sample and the one `shift` before it; zeros come in from the left.
    shifts.map((shift) => set(eight, addShorts(get(eight), pickBytes(zeroVector, get(eight), byBytes((sample) => AT_ONCE + sample - shift))))),
    set(eight, addShorts(get(eight), get(before))),
    storeVector(get(at), get(eight)),
    // The last sum of each band, for all of the next eight.
    set(before, pickBytes(get(eight), get(eight), byBytes((sample) => AT_ONCE - stride + (sample % stride)))),
  ];
  const oneRow = [set(before, zeroVector), set(at, get(row)), set(rowEnd, addInt(get(row), get(line))), upTo(at, get(rowEnd), step, int(AT_ONCE * BYTES))];
  return { name: nameOf(stride), parameters, own, result: null, body: upTo(row, get(end), oneRow, get(line)) };
}
