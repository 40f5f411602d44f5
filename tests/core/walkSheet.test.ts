import { describe, expect, it } from 'vitest';
import { type Walk, shortestWalk } from '../../shared/sampling/walk.ts';
import { type SheetInput, sheetLines } from '../../shared/sampling/walkSheet.ts';
import { gateOf, layoutOf, targetsOf, walkCases } from './walkCases.ts';

/** The same way from its other end. */
function turnedRound(walk: Walk, nodesOf: (target: number) => { alley: number; t: number }): Walk {
  const steps = walk.steps.map(({ from, to, ...rest }) => ({ ...rest, from: to, to: from })).reverse();
  const stops = walk.stops.map(({ target }) => {
    const { alley, t } = nodesOf(target);
    const afterStep = steps.findIndex(({ to }) => to.alley === alley && to.t === t) + 1;
    return { target, alley, afterStep, distanceM: steps.slice(0, afterStep).reduce((sum, { lengthM }) => sum + lengthM, 0) };
  });
  return { ...walk, steps, stops: stops.sort((a, b) => a.afterStep - b.afterStep) };
}

// W2 with 29 vines 1 m apart: vine k stands at k m, aisle j serves row j
const w2 = walkCases['W2']!;
const targets = targetsOf(w2).map(({ alleys, t }) => ({ rowIndex: alleys[0]!, ordinal: t, zone: t < 12 ? 1 : 2 }));
const vinesOfRow: SheetInput['vinesOfRow'] = () => ({ firstOrdinal: 1, alongT: Array.from({ length: 29 }, (_, i) => i + 1) });
const layout = layoutOf(w2);
const lighter = shortestWalk({ layout, targets: targetsOf(w2), start: gateOf(w2), end: 'start' });
const asText = (walk: Walk) => sheetLines({ walk, alleys: layout.alleys, targets, vinesOfRow })
  .map(({ rowIndex, enterBy, ordinal, ahead }) => `${rowIndex + 1} ${enterBy === 'start' ? 'A' : enterBy === 'end' ? 'B' : enterBy} ${ordinal} ${ahead}`);

describe('the lines of a crew sheet', () => {
  it('row, end to enter by, vine, vines ahead, in walking order', () => {
    const other = turnedRound(lighter, (target) => ({ alley: targets[target]!.rowIndex, t: targets[target]!.ordinal }));
    expect(other.stops.map(({ target }) => target)).toEqual([0, 2, 3, 4, 1, 5, 7, 6]);
    // worked by hand
    expect(asText(other)).toEqual(['1 A 3 3', '3 A 10 10', '3 A 12 2', '3 A 28 16', '1 B 25 5', '4 B 29 1', '5 B 15 15', '5 B 5 10']);
  });

  it('the other way round, the same vines are entered by the other ends', () => {
    // worked by hand from the order 6 7 5 1 4 3 2 0
    expect(asText(lighter)).toEqual(['5 A 5 5', '5 A 15 10', '4 B 29 1', '1 B 25 5', '3 B 28 2', '3 B 12 16', '3 B 10 2', '1 A 3 3']);
  });

  it('lines are numbered in walking order and a composite bag opens at the first target of its zone', () => {
    const lines = sheetLines({ walk: lighter, alleys: layout.alleys, targets, vinesOfRow });
    expect(lines.map(({ number }) => number)).toEqual([1, 2, 3, 4, 5, 6, 7, 8]);
    expect(lines.filter(({ opensZone }) => opensZone).map(({ number }) => number)).toEqual([1, 2]);
    expect(lines.map(({ aheadFrom }) => aheadFrom)).toEqual(['entry', 'lastVine', 'entry', 'entry', 'entry', 'lastVine', 'lastVine', 'entry']);
    expect(lines.map(({ heading }) => heading)).toEqual(['toEnd', 'toEnd', 'toStart', 'toStart', 'toStart', 'toStart', 'toStart', 'toEnd']);
  });

  it('from the last vine worked on one side of an alley, the other side is counted along its own row', () => {
    const two = { alleys: [{ s: 0, bottomT: 0, topT: 30 }, { s: 2, bottomT: 0, topT: 30 }, { s: 4, bottomT: 0, topT: 30 }], bottomM: [2, 2], topM: [2, 2], gaps: [] };
    const start = { at: 'end', alley: 1, end: 'bottom' } as const;
    // rows 1 and 2 lie on either side of alley 2; row 2 begins a metre later
    const walk = shortestWalk({ layout: two, start, end: 'anywhere', targets: [{ alleys: [0, 1], t: 5 }, { alleys: [1, 2], t: 9 }] });
    const lines = sheetLines({
      walk, alleys: two.alleys, targets: [{ rowIndex: 0, ordinal: 5 }, { rowIndex: 1, ordinal: 8 }],
      vinesOfRow: (row) => ({ firstOrdinal: 1, alongT: Array.from({ length: 20 }, (_, i) => i + 1 + row) }),
    });
    expect(lines.map(({ alley, ahead, aheadFrom }) => [alley, ahead, aheadFrom])).toEqual([[1, 5, 'entry'], [1, 4, 'lastVine']]);
  });

  it('an alley entered through a gap, or begun inside by somebody who takes over, is named so', () => {
    const gapped = { alleys: [{ s: 0, bottomT: 0, topT: 100 }, { s: 2, bottomT: 0, topT: 100 }], bottomM: [2], topM: [2], gaps: [{ alley: 0, t: 50, lengthM: 2 }] };
    const walk = shortestWalk({ layout: gapped, start: { at: 'alley', alley: 0, t: 40 }, end: 'anywhere', targets: [{ alleys: [0], t: 45 }, { alleys: [1], t: 60 }] });
    const lines = sheetLines({
      walk, alleys: gapped.alleys, targets: [{ rowIndex: 0, ordinal: 45 }, { rowIndex: 1, ordinal: 60 }],
      vinesOfRow: () => ({ firstOrdinal: 1, alongT: Array.from({ length: 100 }, (_, i) => i + 1) }),
    });
    expect(lines.map(({ enterBy, ahead }) => [enterBy, ahead])).toEqual([['inside', 5], ['gap', 10]]);
  });
});
