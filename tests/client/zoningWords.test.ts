import { describe, expect, it } from 'vitest';
import type { ZoningView } from '../../shared/contracts/zonings.ts';
import { numberWords } from '../../src/components/zones/zoningWords.ts';
import type { Format } from '../../src/lib/format.ts';

/** Names of sentences with what is put into them, so that a wording may change. */
const t = (key: string, named: Record<string, unknown> = {}) => (key === 'zones.count' ? `${String(named.n)} zones` : `${key.replace('zones.number.', '')}(${Object.values(named).join(', ')})`);
const format = { percent: (value: number) => `${Math.round(100 * value)} %` } as Format;
const row = (k: number, score: number, holds: number | null) => ({ k, score, holds });
const words = (advisedZones: number, alsoOffer: number[], evidence: ReturnType<typeof row>[]) => numberWords({ advisedZones, alsoOffer, evidence } as unknown as ZoningView, { t, format });

describe('what is said of other numbers of zones', () => {
  it('names the one that stands out more and does not hold', () => {
    expect(words(3, [5], [row(2, 8, 0.99), row(3, 9.1, 0.97), row(4, 8.9, 0.8), row(5, 9.3, 0.51)])).toBe('unsteady(5 zones, 51 %, 97 %)');
  });

  it('names neighbours that are nearly as good or steadier', () => {
    expect(words(3, [2, 4], [row(2, 8, 0.95), row(3, 9.1, 0.7), row(4, 9.05, 0.68)])).toBe('doubtful(3 zones, 70 %, 70 %) steadier(2 zones, 95 %, 70 %) close(4 zones, 68 %, 70 %)');
  });

  it('says nothing of runs of before or of one zone', () => {
    expect(words(3, [], [row(2, 8, null), row(3, 9.1, null)])).toBe('');
    expect(words(1, [2], [row(1, 0, null), row(2, 8, 0.9)])).toBe('');
  });
});
