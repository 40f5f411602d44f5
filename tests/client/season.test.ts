import { afterEach, describe, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import SeasonLine from '../../src/components/frame/SeasonLine.vue';
import { addDays, daysBetween, monthsOf, phaseAt, phasesFrom, seasonShare, weeksOf } from '../../src/lib/season.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

const north = { startsOn: '2025-12-01', endsOn: '2026-11-30' };
const south = { startsOn: '2025-07-01', endsOn: '2026-06-30' };
const phases = phasesFrom({ veraison: ['2026-08-01', '2026-08-18'], dormant: ['2025-12-01', '2026-04-05'], pick: ['2026-09-07', '2026-10-02'] });

describe('season', () => {
  it('counts days across New Year and leap years', () => {
    expect(daysBetween('2025-12-31', '2026-01-01')).toBe(1);
    expect(daysBetween('2028-02-28', '2028-03-01')).toBe(2);
    expect(addDays('2025-12-31', 1)).toBe('2026-01-01');
  });

  it('has 53 weeks begun and twelve months, wherever it starts', () => {
    expect(weeksOf(north)).toHaveLength(53);
    expect(monthsOf(north)).toHaveLength(12);
    expect(monthsOf(south)[0]).toBe('2025-07-01');
    expect(monthsOf(south).at(-1)).toBe('2026-06-01');
    expect(monthsOf({ startsOn: '2025-08-15', endsOn: '2026-01-10' })).toEqual(['2025-09-01', '2025-10-01', '2025-11-01', '2025-12-01', '2026-01-01']);
  });

  it('places days as shares and holds those outside at the ends', () => {
    expect(seasonShare(north, '2025-12-01')).toBe(0);
    expect(seasonShare(north, '2026-06-01')).toBeCloseTo(182 / 365, 12);
    expect(seasonShare(north, '2030-01-01')).toBe(1);
  });

  it('orders phases by their begin and knows the one that holds a day', () => {
    expect(phases.map(({ id }) => id)).toEqual(['dormant', 'veraison', 'pick']);
    expect(phaseAt(phases, '2026-08-18')?.id).toBe('veraison');
    expect(phaseAt(phases, '2026-09-03')).toBeNull();
  });
});

describe('season line', () => {
  let wrapper: VueWrapper;
  afterEach(() => wrapper.unmount());
  const line = (phase: string | null = null) => mountWithTexts(SeasonLine, { props: { season: north, phases, today: '2026-09-03', phase } });

  it('names its phases and today', async () => {
    wrapper = await line();
    expect(wrapper.findAll('button').map((button) => textOf(button.element))).toEqual(['Dormant', 'Veraison', 'Pick']);
    expect(textOf(wrapper.find('.flag').element)).toMatch(/^Today: Thu 3 Sept?$/);
  });

  it('choosing a phase holds the page to it, choosing it again lets go', async () => {
    wrapper = await line();
    await wrapper.findAll('button')[1]!.trigger('click');
    expect(wrapper.emitted('update:phase')).toEqual([['veraison']]);
    wrapper.unmount();
    wrapper = await line('veraison');
    expect(wrapper.findAll('button')[1]!.attributes('aria-pressed')).toBe('true');
    await wrapper.findAll('button')[1]!.trigger('click');
    expect(wrapper.emitted('update:phase')).toEqual([[null]]);
  });

  it('arrows move by phase and Home lets go', async () => {
    wrapper = await line('veraison');
    await wrapper.trigger('keydown', { key: 'ArrowRight' });
    await wrapper.trigger('keydown', { key: 'Home' });
    expect(wrapper.emitted('update:phase')).toEqual([['pick'], [null]]);
  });
});
