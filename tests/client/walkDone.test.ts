import { describe, expect, it } from 'vitest';
import WalkDone from '../../src/components/field/WalkDone.vue';
import type { Entry } from '../../src/offline/fieldDatabase.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

const entry = (id: string, kind: Entry['kind'], supersedes: string | null = null): Entry =>
  ({ id, kind, estateId: 'e', personId: 'p', roundId: 'r', row: '3', vine: 7, at: '2026-06-02T08:00:00Z', received: 0, outcome: null, finding: null, reading: kind === 'reading' ? { id, supersedes } : null }) as unknown as Entry;

const paragraphs = async (props: { entries: Entry[]; waiting: number }) => {
  const done = await mountWithTexts(WalkDone, { props: { ...props, hasLab: false, isTaken: false } });
  return done.findAll('p').map(({ element }) => textOf(element));
};

describe('the end of a walk', () => {
  it('says that others read it, not that nothing will be sent, where this phone has nothing', async () => {
    expect(await paragraphs({ entries: [], waiting: 0 })).toEqual(['Every vine of this walk is read already: by others, or with another phone.', 'Nothing waits on this phone.']);
  });

  it('counts a corrected reading once, and tells picks and findings from readings', async () => {
    const entries = [entry('a', 'reading'), entry('b', 'reading', 'a'), entry('c', 'reading'), entry('d', 'pick'), entry('f', 'finding')];
    expect(await paragraphs({ entries, waiting: 3 })).toEqual(['2 readings with this phone.', 'Fruit of 1 vine picked.', '1 vine not read: something else stood there.', 'Go back to where there is signal, so that it is sent.']);
  });

  it('sends nobody back to a signal once all is received', async () => {
    expect(await paragraphs({ entries: [{ ...entry('a', 'reading'), received: 1 }], waiting: 0 })).toEqual(['1 reading with this phone.', 'Nothing waits on this phone.']);
  });
});
