import { describe, expect, it } from 'vitest';
import type { PublishEffects as Effects } from '../../shared/contracts/zonings.ts';
import PublishEffects from '../../src/components/zones/PublishEffects.vue';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

const round = (id: string, done: number) => ({ id, planId: 'plan-1', onDate: '2026-09-05', people: ['Nia Holt'], vines: 33, done });
const effects: Effects = {
  season: '2026', replaces: 1, shownNow: null, readingsMoved: 0, readingsOutside: 0, vinesMoved: 26, renumbered: [],
  openRounds: [round('round-1', 12), round('round-2', 0)],
  byZone: [{ zone: 1, vines: 2656, sampled: 12, toVisit: 40 }, { zone: 2, vines: 1328, sampled: 0, toVisit: 26 }],
  plans: [{ id: 'plan-1', name: 'Counts', isDraft: false, vines: 33, vinesMoved: 4 }],
  lots: [{ id: 'lot-1', name: 'North', isPicked: false, vinesMoved: 4 }],
  underFloor: [],
};
const shown = (given: { mayCallOff: boolean; over?: Partial<Effects>; mayOpen?: boolean; callOff?: string[] }) => mountWithTexts(PublishEffects, { props: { effects: { ...effects, ...given.over }, estateId: 'estate-1', mayOpen: () => given.mayOpen ?? true, mayCallOff: given.mayCallOff, callOff: given.callOff ?? [] } });

describe('what publishing would touch', () => {
  it('asks of each round whether it is left or called off', async () => {
    const list = await shown({ mayCallOff: true, callOff: ['round-2'] });
    const choices = list.findAll('fieldset');
    expect(choices.map((choice) => choice.findAll<HTMLInputElement>('input').map(({ element }) => element.checked))).toEqual([[true, false], [false, true]]);
    expect(textOf(list.findAll('li')[1]!.element)).toContain('12 of its 33 vines are read. It stays good');
    expect(textOf(list.findAll('li')[2]!.element)).toContain('None of its 33 vines is read yet. Called off on publishing');
    await choices[0]!.findAll('input')[1]!.setValue(true);
    await choices[1]!.findAll('input')[0]!.setValue(true);
    expect(list.emitted('update:callOff')).toEqual([[['round-2', 'round-1']], [['round-1']]]);
    list.unmount();
  });

  it('leads to rounds, plans and lots in a new page, those that the person may see', async () => {
    const list = await shown({ mayCallOff: true });
    expect(list.findAll('a').map((link) => [link.attributes('href'), link.attributes('target')])).toEqual([
      ...['round-1', 'round-2', 'plan-1'].map(() => ['/e/estate-1/plans/plan-1/targets', '_blank']),
      ['/e/estate-1/lots/lot-1', '_blank'],
    ]);
    list.unmount();
    const none = await shown({ mayCallOff: false, mayOpen: false });
    expect([none.findAll('a').length, none.findAll('fieldset').length]).toEqual([0, 0]);
    none.unmount();
  });

  it('says how far sampling is in the new zones', async () => {
    const list = await shown({ mayCallOff: true });
    expect(list.findAll('tbody tr').map((line) => textOf(line.element))).toEqual([expect.stringMatching(/^Zone 1.*2.656.*12.*40$/), expect.stringMatching(/^Zone 2.*1.328.*0.*26$/)]);
    list.unmount();
  });

  it.each([
    [{ replaces: null, shownNow: null }, 'These become the first zones in force'],
    [{ replaces: null, shownNow: { number: 3, season: '2025', isLater: false } }, 'These become the first zones of 2026Version 3 stays in force for 2025; the map and new plans go by the new zones.'],
    [{ season: '2025', replaces: 3, shownNow: { number: 5, season: '2026', isLater: true } }, 'Version 3 is replaced26 vines change zone.They count for 2025 only: the map keeps version 5 of 2026.'],
  ])('tells zones of another season from those that are replaced: %#', async (over, said) => {
    const list = await shown({ mayCallOff: false, over });
    expect(textOf(list.find('li').element)).toBe(said);
    list.unmount();
  });
});
