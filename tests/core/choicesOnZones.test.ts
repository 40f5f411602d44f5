import { describe, expect, it } from 'vitest';
import { planChoices, type PlanChoicesInput } from '../../shared/contracts/planChoices.ts';
import { choicesOnZones } from '../../shared/sampling/choicesOnZones.ts';

/** So many vines of each pair of an earlier zone and one of now. */
function vines(...parts: readonly (readonly [from: number, to: number, count: number])[]): [number[], number[]] {
  const all = parts.flatMap(([from, to, count]) => Array.from({ length: count }, () => [from, to] as const));
  return [all.map(([from]) => from), all.map(([, to]) => to)];
}
const asked = (over: Partial<PlanChoicesInput> = {}) => planChoices.parse({ measures: [{ code: 'brix', margin: 0.6, confidence: 0.9 }], people: 3, minimum: 7, ...over });
const typed = (spreads: Record<string, number>, means?: Record<string, number>) => [{ code: 'brix', margin: 0.6, spreads, ...(means ? { means } : {}) }];

describe('choices of a plan on other zones of the same vines', () => {
  it('are all there, and the same where nothing was said of a zone', () => {
    const choices = asked();
    expect(choicesOnZones(choices, ...vines([1, 2, 50], [2, 1, 30], [2, 2, 20]))).toEqual({ choices, leftOut: [] });
  });

  it('follow zones that only got another number', () => {
    const { choices, leftOut } = choicesOnZones(asked({ measures: typed({ 1: 1.3 }, { 3: 21 }), zoneSeconds: { 1: 40, 2: 25 }, pools: [[2, 3]] }), ...vines([1, 3, 50], [2, 1, 40], [3, 2, 40]));
    expect(choices.measures).toEqual(typed({ 3: 1.3 }));
    expect([choices.zoneSeconds, choices.pools]).toEqual([{ 3: 40, 1: 25 }, [[1, 2]]]);
    // Zones sampled as one have their mean under the lowest number of them, so that one typed for the other was never heard.
    expect(leftOut).toEqual([3]);
  });

  it('go to the part with more than half of the vines where a zone was divided, and nowhere where none has so many', () => {
    const choices = asked({ measures: typed({ 1: 1.3, 2: 0.9 }), zoneSeconds: { 1: 40, 2: 25 } });
    const divided = choicesOnZones(choices, ...vines([1, 1, 49], [1, 3, 51], [2, 2, 50], [2, 4, 50]));
    expect(divided.choices.measures).toEqual(typed({ 3: 1.3 }));
    expect(divided.choices.zoneSeconds).toEqual({ 3: 40 });
    expect(divided.leftOut).toEqual([2]);
  });

  it('are those of the larger zone where two became one, also when it has none of its own', () => {
    const merged = vines([1, 1, 60], [2, 1, 50], [3, 2, 50]);
    expect(choicesOnZones(asked({ zoneSeconds: { 1: 40, 2: 25, 3: 5 } }), ...merged)).toMatchObject({ choices: { zoneSeconds: { 1: 40, 2: 5 } }, leftOut: [2] });
    expect(choicesOnZones(asked({ measures: typed({ 2: 0.9 }) }), ...merged)).toEqual({ choices: asked({ measures: [{ code: 'brix', margin: 0.6 }] }), leftOut: [2] });
  });

  it('do not speak for a zone that is mostly of another', () => {
    expect(choicesOnZones(asked({ zoneSeconds: { 2: 25 } }), ...vines([1, 1, 90], [1, 3, 110], [2, 1, 30]))).toMatchObject({ choices: { zoneSeconds: {} }, leftOut: [2] });
  });

  it('keep zones sampled as one together, with what was typed for them, and need no pool once they are one zone', () => {
    const pooled = asked({ measures: typed({ 1: 1.3, 3: 0.7 }, { 1: 21 }), pools: [[1, 2]] });
    const renumbered = choicesOnZones(pooled, ...vines([1, 3, 50], [2, 2, 50], [3, 1, 60]));
    expect(renumbered).toEqual({ choices: asked({ measures: typed({ 2: 1.3, 1: 0.7 }, { 2: 21 }), pools: [[2, 3]] }), leftOut: [] });
    // Zone 3 has more vines than either of the two in what became of them, and fewer than both.
    const merged = choicesOnZones(pooled, ...vines([1, 1, 40], [2, 1, 40], [3, 1, 50], [3, 2, 60]));
    expect(merged).toEqual({ choices: asked({ measures: typed({ 1: 1.3, 2: 0.7 }, { 1: 21 }) }), leftOut: [] });
  });

  it('let go of a pool of which a part is nowhere', () => {
    const apart = choicesOnZones(asked({ measures: typed({ 1: 1.3 }), pools: [[1, 2]] }), ...vines([1, 1, 50], [2, 2, 30], [2, 3, 30], [3, 4, 50]));
    expect(apart).toEqual({ choices: asked({ measures: [{ code: 'brix', margin: 0.6 }] }), leftOut: [1, 2] });
  });

  it('have no zone where vines are in none, and none for zones without vines', () => {
    expect(choicesOnZones(asked({ zoneSeconds: { 1: 40, 7: 5 } }), ...vines([1, 0, 60], [1, 1, 40]))).toMatchObject({ choices: { zoneSeconds: {} }, leftOut: [1, 7] });
    expect(choicesOnZones(asked({ zoneSeconds: { 1: 40 } }), [0, 0], [1, 1])).toMatchObject({ choices: { zoneSeconds: {} }, leftOut: [1] });
  });
});
