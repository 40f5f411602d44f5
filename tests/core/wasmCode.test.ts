import { describe, expect, it } from 'vitest';
import { nearestWithDoubt } from '../../shared/analysis/kmeansNearest.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { addInt, F64, float, floats, get, I32, int, ints, localsOf, next, set, upTo, wasmModule, when, equal, add, squareRoot, type WasmFunction } from '../../shared/analysis/wasmCode.ts';

function exportsOf(functions: readonly WasmFunction[]) {
  return new WebAssembly.Instance(new WebAssembly.Module(wasmModule(functions))).exports as Record<string, (...values: number[]) => number>;
}

describe('WebAssembly from lists of bytes', () => {
  const numbers = [0, 1, -1, 63, 64, -64, -65, 127, 128, 8191, 8192, -8193, 2 ** 31 - 1, -(2 ** 31)];
  it.each(numbers)('holds the whole number %i', (number) => {
    expect(exportsOf([{ name: 'f', parameters: {}, own: {}, result: I32, body: int(number) }]).f!()).toBe(number);
  });

  it.each([0, -0, 0.1, -2.5e-300, Infinity])('holds the double %d', (number) => {
    expect(exportsOf([{ name: 'f', parameters: {}, own: {}, result: F64, body: float(number) }]).f!()).toBe(number);
  });

  it('walks up to an end, and not at all where the end is no further', () => {
    const parameters = ints('end', 'skipped');
    const own = ints('i', 'sum');
    const { end, skipped, i, sum } = localsOf(parameters, own);
    const body = [upTo(i, get(end), [when(equal(get(i), get(skipped)), next(1)), set(sum, addInt(get(sum), get(i)))]), get(sum)];
    const { f } = exportsOf([{ name: 'f', parameters, own, result: I32, body }]);
    expect([f!(5, -1), f!(5, 3), f!(1, -1), f!(0, -1), f!(-4, -1)]).toEqual([10, 7, 0, 0, 0]);
  });

  it('exports several functions by their names', () => {
    const parameters = floats('a');
    const { a } = localsOf(parameters, {});
    const { twice, root } = exportsOf([
      { name: 'twice', parameters, own: {}, result: F64, body: add(get(a), get(a)) },
      { name: 'root', parameters, own: {}, result: F64, body: squareRoot(get(a)) },
    ]);
    expect([twice!(0.1), root!(2)]).toEqual([0.2, Math.SQRT2]);
  });
});

describe('nearest centres', () => {
  it('are those of a plain loop to the last bit, over parts of the table too', () => {
    const random = seededRandom(8);
    const count = 20_001;
    const values = Float64Array.from({ length: 3 * count }, () => randomNormal(random));
    const centres = Float64Array.from({ length: 4 * 3 }, () => randomNormal(random));
    const { labels, doubt, inertia } = nearestWithDoubt({ values, count, dimensions: 3 }, centres);
    let sum = 0;
    for (let point = 0; point < count; point++) {
      const squared = [0, 1, 2, 3].map((zone) => [0, 1, 2].reduce((so, f) => so + (values[3 * point + f]! - centres[3 * zone + f]!) ** 2, 0));
      const [best, second] = [...squared].sort((a, b) => a - b) as [number, number];
      sum += best;
      if (labels[point] !== squared.indexOf(best) || doubt[point] !== Math.fround(best / second)) expect.fail(`point ${point}`);
    }
    expect(inertia).toBe(sum);
  });
});
