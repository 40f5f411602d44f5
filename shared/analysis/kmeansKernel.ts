/**
 * The loops of k-means over all points, in WebAssembly (see wasmCode). Every function works on addresses in one memory:
 * doubles of points and centres row after row, a byte a label. `distance` steps along a point and a centre as a loop in
 * JavaScript would, so outcomes are the same to the bit.
 */

import { add, addInt, atLeast, either, equal, F64, float, floats, get, greater, I32, int, ints, less, loadByte, loadFloat, localsOf, minus, next, over, result, set, squareRoot, storeByte, storeFloat, storeInt, storeSingle, times, timesInt, upTo, wasmModule, when, type Code, type WasmFunction } from './wasmCode.ts';

export interface KMeansKernel {
  readonly memory: WebAssembly.Memory;
  /** Squared distance of every point to the target, or what it was when that is shorter; returns the sum. */
  shorten(values: number, count: number, width: number, before: number, target: number, into: number): number;
  /** First point at which the running sum of weights passes the target; the last when none does. */
  draw(weights: number, count: number, target: number): number;
  /** Nearest centre and lead over the next for every point; adds to sums and sizes, which the caller has emptied. */
  assignAll(values: number, count: number, width: number, k: number, centres: number, labels: number, lead: number, sums: number, sizes: number): void;
  /** One pass of Lloyd's iteration with bounds; returns how many points changed. */
  reassign(values: number, count: number, width: number, k: number, centres: number, labels: number, lead: number, sums: number, sizes: number, loss: number, halfGap: number): number;
  /** Sum of squared distances to the own centre. */
  inertia(values: number, count: number, width: number, centres: number, labels: number): number;
  /** One pass of exchanges; returns `gained` and what it saved, and writes the number of moves at address 0. */
  exchange(values: number, count: number, width: number, k: number, centres: number, labels: number, sizes: number, gained: number): number;
  /** Nearest centre, and squared distance to it over that to the next, for every point; returns `sofar` and the sum of squares. */
  doubt(values: number, count: number, width: number, k: number, centres: number, labels: number, doubt: number, sofar: number): number;
}

let kernel: KMeansKernel | undefined;

/** Compiled at first use. */
export function kmeansKernel(): KMeansKernel {
  kernel ??= new WebAssembly.Instance(new WebAssembly.Module(wasmModule([shorten(), draw(), assignAll(), reassign(), inertia(), exchange(), doubt()]))).exports as unknown as KMeansKernel;
  return kernel;
}

const DOUBLE = int(8);
const plus = (local: number, value: Code): Code => set(local, add(get(local), value));
const forward = (local: number, by: Code): Code => set(local, addInt(get(local), by));
const at = (base: number, index: Code, width: Code): Code => addInt(get(base), timesInt(index, width));

interface Walk {
  readonly sum: number;
  readonly difference: number;
  /** Addresses, left behind the last number of either. */
  readonly point: number;
  readonly centre: number;
  readonly end: Code;
}

/** Squared distance into `sum`, from the numbers at `point` up to `end` and those at `centre`. */
function distance({ sum, difference, point, centre, end }: Walk): Code {
  const one = [set(difference, minus(loadFloat(get(point)), loadFloat(get(centre)))), plus(sum, times(get(difference), get(difference))), forward(centre, DOUBLE)];
  return [set(sum, float(0)), upTo(point, end, one, DOUBLE)];
}

interface Search extends Walk {
  readonly base: number;
  readonly zone: number;
  readonly k: number;
  readonly centres: number;
  readonly best: number;
  readonly next: number;
  readonly nearest: number;
}

/** Nearest centre into `nearest`, squared distances to it and the next into `best` and `next`; `end` is the end of the point at `base`. */
function nearestOf({ base, zone, k, centres, best, next: second, nearest, ...walk }: Search): Code {
  const { sum, point, centre } = walk;
  const closer = [set(second, get(best)), set(best, get(sum)), set(nearest, get(zone))];
  const one = [set(point, get(base)), distance(walk), when(less(get(sum), get(best)), closer, when(less(get(sum), get(second)), set(second, get(sum))))];
  return [set(best, float(Infinity)), set(second, float(Infinity)), set(nearest, int(0)), set(zone, int(0)), set(centre, get(centres)), upTo(zone, get(k), one)];
}

/** Adds the point at `base` to the sums and size of a zone, or takes it off. */
function account(way: typeof add, { base, zone, width, sums, sizes, point, centre, end }: { base: number; zone: Code; width: number; sums: number; sizes: number; point: number; centre: number; end: Code }): Code {
  const one = [storeFloat(get(centre), way(loadFloat(get(centre)), loadFloat(get(point)))), forward(centre, DOUBLE)];
  const size = at(sizes, zone, DOUBLE);
  return [storeFloat(size, way(loadFloat(size), float(1))), set(point, get(base)), set(centre, at(sums, zone, get(width))), upTo(point, end, one, DOUBLE)];
}

/** `width` is the bytes of a point. */
function shorten(): WasmFunction {
  const parameters = ints('values', 'count', 'width', 'before', 'target', 'into');
  const own = { ...ints('i', 'point', 'centre', 'end'), ...floats('total', 'sum', 'difference') };
  const { values, count, width, before, target, into, i, point, centre, end, total, sum, difference } = localsOf(parameters, own);
  const one = [
    set(end, addInt(get(point), get(width))),
    set(centre, get(target)),
    distance({ sum, difference, point, centre, end: get(end) }),
    when(less(loadFloat(get(before)), get(sum)), set(sum, loadFloat(get(before)))),
    storeFloat(get(into), get(sum)),
    plus(total, get(sum)),
    forward(before, DOUBLE),
    forward(into, DOUBLE),
  ];
  return { name: 'shorten', parameters, own, result: F64, body: [set(point, get(values)), upTo(i, get(count), one), get(total)] };
}

function draw(): WasmFunction {
  const parameters = { ...ints('weights', 'count'), ...floats('target') };
  const own = { ...ints('i'), ...floats('running') };
  const { weights, count, target, i, running } = localsOf(parameters, own);
  const one = [plus(running, loadFloat(at(weights, get(i), DOUBLE))), when(greater(get(running), get(target)), result(get(i)))];
  return { name: 'draw', parameters, own, result: I32, body: [upTo(i, get(count), one), addInt(get(count), int(-1))] };
}

function assignAll(): WasmFunction {
  const parameters = ints('values', 'count', 'width', 'k', 'centres', 'labels', 'lead', 'sums', 'sizes');
  const own = { ...ints('i', 'zone', 'nearest', 'point', 'centre', 'end'), ...floats('sum', 'difference', 'best', 'second') };
  const { values, count, width, k, centres, labels, lead, sums, sizes, i, zone, nearest, point, centre, end, sum, difference, best, second } = localsOf(parameters, own);
  const one = [
    set(end, addInt(get(values), get(width))),
    nearestOf({ base: values, zone, k, centres, best, next: second, nearest, sum, difference, point, centre, end: get(end) }),
    storeByte(addInt(get(labels), get(i)), get(nearest)),
    storeFloat(at(lead, get(i), DOUBLE), minus(squareRoot(get(second)), squareRoot(get(best)))),
    account(add, { base: values, zone: get(nearest), width, sums, sizes, point, centre, end: get(end) }),
    set(values, get(end)),
  ];
  return { name: 'assignAll', parameters, own, result: null, body: upTo(i, get(count), one) };
}

function reassign(): WasmFunction {
  const parameters = ints('values', 'count', 'width', 'k', 'centres', 'labels', 'lead', 'sums', 'sizes', 'loss', 'halfGap');
  const own = { ...ints('i', 'mine', 'changes', 'base', 'zone', 'nearest', 'point', 'centre', 'end'), ...floats('left', 'gap', 'sum', 'difference', 'best', 'second') };
  const { values, count, width, k, centres, labels, lead, sums, sizes, loss, halfGap, i, mine, changes, base, zone, nearest, point, centre, end, left, gap, sum, difference, best, second } = localsOf(parameters, own);
  const parts = { base, width, sums, sizes, point, centre, end: get(end) };
  const one = [
    set(mine, loadByte(addInt(get(labels), get(i)))),
    set(left, minus(loadFloat(at(lead, get(i), DOUBLE)), loadFloat(at(loss, get(mine), DOUBLE)))),
    storeFloat(at(lead, get(i), DOUBLE), get(left)),
    when(greater(get(left), float(0)), next(1)),
    set(base, at(values, get(i), get(width))),
    set(end, addInt(get(base), get(width))),
    set(point, get(base)),
    set(centre, at(centres, get(mine), get(width))),
    distance({ sum, difference, point, centre, end: get(end) }),
    set(gap, loadFloat(at(halfGap, get(mine), DOUBLE))),
    // Within half the way to the nearest other centre no other can be nearer.
    when(less(get(sum), times(get(gap), get(gap))), [storeFloat(at(lead, get(i), DOUBLE), times(float(2), minus(get(gap), squareRoot(get(sum))))), next(1)]),
    nearestOf({ base, zone, k, centres, best, next: second, nearest, sum, difference, point, centre, end: get(end) }),
    storeFloat(at(lead, get(i), DOUBLE), minus(squareRoot(get(second)), squareRoot(get(best)))),
    when(equal(get(nearest), get(mine)), next(1)),
    storeByte(addInt(get(labels), get(i)), get(nearest)),
    account(minus, { ...parts, zone: get(mine) }),
    account(add, { ...parts, zone: get(nearest) }),
    forward(changes, int(1)),
  ];
  return { name: 'reassign', parameters, own, result: I32, body: [upTo(i, get(count), one), get(changes)] };
}

function inertia(): WasmFunction {
  const parameters = ints('values', 'count', 'width', 'centres', 'labels');
  const own = { ...ints('i', 'point', 'centre', 'end'), ...floats('total', 'sum', 'difference') };
  const { values, count, width, centres, labels, i, point, centre, end, total, sum, difference } = localsOf(parameters, own);
  const one = [set(end, addInt(get(point), get(width))), set(centre, at(centres, loadByte(addInt(get(labels), get(i))), get(width))), distance({ sum, difference, point, centre, end: get(end) }), plus(total, get(sum))];
  return { name: 'inertia', parameters, own, result: F64, body: [set(point, get(values)), upTo(i, get(count), one), get(total)] };
}

/** See kmeansExchange for the rule; a gain below the rounding of the sums is none, or two zones could pass a point to and fro. */
function exchange(): WasmFunction {
  const parameters = { ...ints('values', 'count', 'width', 'k', 'centres', 'labels', 'sizes'), ...floats('gained') };
  const own = { ...ints('i', 'mine', 'zone', 'target', 'moves', 'point', 'centre', 'other', 'end'), ...floats('ownSize', 'size', 'saved', 'least', 'sum', 'difference') };
  const { values, count, width, k, centres, labels, sizes, gained, i, mine, zone, target, moves, point, centre, other, end, ownSize, size, saved, least, sum, difference } = localsOf(parameters, own);
  const sizeOf = (index: number) => loadFloat(at(sizes, get(index), DOUBLE));
  const joining = times(over(get(size), add(get(size), float(1))), get(sum));
  const weigh = [
    set(point, get(values)),
    distance({ sum, difference, point, centre, end: get(end) }),
    set(size, sizeOf(zone)),
    when(equal(get(zone), get(mine)), set(saved, times(over(get(ownSize), minus(get(ownSize), float(1))), get(sum))), when(less(joining, get(least)), [set(least, joining), set(target, get(zone))])),
  ];
  const move = [
    storeFloat(get(centre), add(loadFloat(get(centre)), over(minus(loadFloat(get(centre)), loadFloat(get(point))), minus(get(ownSize), float(1))))),
    storeFloat(get(other), add(loadFloat(get(other)), over(minus(loadFloat(get(point)), loadFloat(get(other))), add(get(size), float(1))))),
    forward(centre, DOUBLE),
    forward(other, DOUBLE),
  ];
  const gain = [
    set(size, sizeOf(target)),
    set(point, get(values)),
    set(centre, at(centres, get(mine), get(width))),
    set(other, at(centres, get(target), get(width))),
    upTo(point, get(end), move, DOUBLE),
    storeFloat(at(sizes, get(mine), DOUBLE), minus(get(ownSize), float(1))),
    storeFloat(at(sizes, get(target), DOUBLE), add(get(size), float(1))),
    storeByte(addInt(get(labels), get(i)), get(target)),
    plus(gained, minus(get(saved), get(least))),
    forward(moves, int(1)),
  ];
  const one = [
    set(end, addInt(get(values), get(width))),
    set(mine, loadByte(addInt(get(labels), get(i)))),
    set(ownSize, sizeOf(mine)),
    when(less(get(ownSize), float(2)), [], [
      set(saved, float(0)),
      set(least, float(Infinity)),
      set(target, get(mine)),
      set(zone, int(0)),
      set(centre, get(centres)),
      upTo(zone, get(k), weigh),
      when(atLeast(get(least), times(get(saved), float(1 - 1e-12))), [], gain),
    ]),
    set(values, get(end)),
  ];
  return { name: 'exchange', parameters, own, result: F64, body: [upTo(i, get(count), one), storeInt(int(0), get(moves)), get(gained)] };
}

function doubt(): WasmFunction {
  const parameters = { ...ints('values', 'count', 'width', 'k', 'centres', 'labels', 'into'), ...floats('total') };
  const own = { ...ints('i', 'zone', 'nearest', 'point', 'centre', 'end'), ...floats('sum', 'difference', 'best', 'second') };
  const { values, count, width, k, centres, labels, into, total, i, zone, nearest, point, centre, end, sum, difference, best, second } = localsOf(parameters, own);
  const one = [
    set(end, addInt(get(values), get(width))),
    nearestOf({ base: values, zone, k, centres, best, next: second, nearest, sum, difference, point, centre, end: get(end) }),
    storeByte(addInt(get(labels), get(i)), get(nearest)),
    plus(total, get(best)),
    storeSingle(at(into, get(i), int(4)), either(equal(get(k), int(1)), float(0), either(greater(get(second), float(0)), over(get(best), get(second)), float(1)))),
    set(values, get(end)),
  ];
  return { name: 'doubt', parameters, own, result: F64, body: [upTo(i, get(count), one), get(total)] };
}
