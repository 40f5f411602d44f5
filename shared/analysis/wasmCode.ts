/**
 * A few WebAssembly instructions as nested lists of bytes, and a module made of them (WebAssembly Core Specification 1.0,
 * chapter 5, "Binary Format"). For loops that run from the first second on: engines compile WebAssembly at once, where a loop
 * in JavaScript is interpreted, compiled and, when a guess about it fails, compiled again. Arithmetic is that of JavaScript
 * numbers (IEEE 754, no fused operations), so both give the same bits.
 */

export type Code = number | readonly Code[];

export const I32 = 0x7f;
export const F64 = 0x7c;
/** Sixteen bytes that one instruction works on (WebAssembly Core Specification 2.0, "Vector Instructions"). */
const V128 = 0x7b;
export type ValueType = typeof I32 | typeof F64 | typeof V128;

const EMPTY = 0x40;

export const get = (local: number): Code => [0x20, unsigned(local)];
export const set = (local: number, value: Code): Code => [value, 0x21, unsigned(local)];
export const int = (value: number): Code => [0x41, signed(value)];
export const float = (value: number): Code => [0x44, [...new Uint8Array(Float64Array.of(value).buffer)]];

const binary = (opcode: number) => (left: Code, right: Code): Code => [left, right, opcode];

export const equal = binary(0x46);
export const unequal = binary(0x47);
export const both = binary(0x71);
const lessInt = binary(0x48);
export const addInt = binary(0x6a);
export const timesInt = binary(0x6c);
export const less = binary(0x63);
export const greater = binary(0x64);
export const atLeast = binary(0x66);
export const add = binary(0xa0);
export const minus = binary(0xa1);
export const times = binary(0xa2);
export const over = binary(0xa3);
/** Of 32 bits without sign. */
export const toFloat = (value: Code): Code => [value, 0xb8];
export const squareRoot = (value: Code): Code => [value, 0x9f];

export const loadFloat = (address: Code): Code => [address, 0x2b, 3, 0];
export const storeFloat = (address: Code, value: Code): Code => [address, value, 0x39, 3, 0];
/** Rounded to 32 bits, as by a Float32Array. */
export const storeSingle = (address: Code, value: Code): Code => [address, value, 0xb6, 0x38, 2, 0];
export const loadInt = (address: Code): Code => [address, 0x28, 2, 0];
/** Sixteen bits without sign. */
export const loadShort = (address: Code): Code => [address, 0x2f, 1, 0];
export const loadByte = (address: Code): Code => [address, 0x2d, 0, 0];
export const storeByte = (address: Code, value: Code): Code => [address, value, 0x3a, 0, 0];
export const storeInt = (address: Code, value: Code): Code => [address, value, 0x36, 2, 0];

export const loadVector = (address: Code): Code => [address, 0xfd, 0x00, 0, 0];
export const storeVector = (address: Code, value: Code): Code => [address, value, 0xfd, 0x0b, 0, 0];
export const zeroVector: Code = [0xfd, 0x0c, new Array<number>(16).fill(0)];
/** Eight whole numbers of 16 bits, each wrapping by itself. */
export const addShorts = (left: Code, right: Code): Code => [left, right, 0xfd, 0x8e, 0x01];
/** Sixteen bytes picked from both: 0…15 from the left, 16…31 from the right. */
export const pickBytes = (left: Code, right: Code, bytes: readonly number[]): Code => [left, right, 0xfd, 0x0d, bytes];

export const when = (condition: Code, then: Code, otherwise: Code = []): Code => [condition, 0x04, EMPTY, then, 0x05, otherwise, 0x0b];
export const either = (condition: Code, then: Code, otherwise: Code): Code => [condition, 0x04, F64, then, 0x05, otherwise, 0x0b];
export const result = (value: Code): Code => [value, 0x0f];

/** Body for local = its value now … end − 1 by steps; `next(depth)` in the body goes on with the following, `depth` ifs and loops further out. */
export function upTo(local: number, end: Code, body: Code, step: Code = int(1)): Code {
  const again = lessInt(get(local), end);
  return when(again, [0x03, EMPTY, 0x02, EMPTY, body, 0x0b, set(local, addInt(get(local), step)), again, 0x0d, 0, 0x0b]);
}

export const next = (depth: number): Code => [0x0c, unsigned(depth)];

type Locals<Name extends string> = Readonly<Record<Name, ValueType>>;

export const ints = <Name extends string>(...names: Name[]) => Object.fromEntries(names.map((name) => [name, I32])) as Locals<Name>;
export const vectors = <Name extends string>(...names: Name[]) => Object.fromEntries(names.map((name) => [name, V128])) as Locals<Name>;
export const floats = <Name extends string>(...names: Name[]) => Object.fromEntries(names.map((name) => [name, F64])) as Locals<Name>;

/** Numbers of the locals of a function. */
export function localsOf<P extends string, O extends string>(parameters: Locals<P>, own: Locals<O>): Record<P | O, number> {
  return Object.fromEntries([...Object.keys(parameters), ...Object.keys(own)].map((name, local) => [name, local])) as Record<P | O, number>;
}

export interface WasmFunction {
  readonly name: string;
  readonly parameters: Locals<string>;
  /** Further locals. */
  readonly own: Locals<string>;
  readonly result: ValueType | null;
  readonly body: Code;
}

/** A module that exports these functions and its memory, `memory`, of one page of 64 KB that can grow. */
export function wasmModule(functions: readonly WasmFunction[]): Uint8Array<ArrayBuffer> {
  const types = functions.map(({ parameters, result: type }) => [0x60, vector(Object.values(parameters)), vector(type === null ? [] : [type])]);
  const exported = functions.map(({ name }, at) => [text(name), 0x00, unsigned(at)]);
  const bodies = functions.map(({ own, body }) => sized([vector(Object.values(own).map((type) => [1, type])), body, 0x0b]));
  return Uint8Array.from(
    flat([
      [0x00, 0x61, 0x73, 0x6d, 0x01, 0x00, 0x00, 0x00],
      section(1, vector(types)),
      section(3, vector(functions.map((_, at) => unsigned(at)))),
      section(5, vector([[0x00, 1]])),
      section(7, vector([...exported, [text('memory'), 0x02, 0x00]])),
      section(10, vector(bodies)),
    ]),
  );
}

const vector = (items: readonly Code[]): Code => [unsigned(items.length), ...items];
const section = (id: number, content: Code): Code => [id, sized(content)];
const text = (name: string): Code => vector([...new TextEncoder().encode(name)]);

function sized(content: Code): Code {
  const bytes = flat(content);
  return [unsigned(bytes.length), bytes];
}

function flat(code: Code): number[] {
  const bytes: number[] = [];
  const put = (part: Code): void => {
    if (typeof part === 'number') bytes.push(part);
    else for (const each of part) put(each);
  };
  put(code);
  return bytes;
}

/** LEB128 of a whole number from zero on. */
function unsigned(value: number): Code {
  const bytes: number[] = [];
  for (let left = value; ; left >>>= 7) {
    if (left < 0x80) return [...bytes, left];
    bytes.push((left & 0x7f) | 0x80);
  }
}

/** Signed LEB128 of a 32-bit number. */
function signed(value: number): Code {
  const bytes: number[] = [];
  for (let left = value; ; left >>= 7) {
    const low = left & 0x7f;
    if (left >> 7 === ((low & 0x40) === 0 ? 0 : -1)) return [...bytes, low];
    bytes.push(low | 0x80);
  }
}
