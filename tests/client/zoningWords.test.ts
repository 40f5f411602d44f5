import { describe, expect, it } from 'vitest';
import type { ZoningView } from '../../shared/contracts/zonings.ts';
import { adviceWords, numberWords, warningWords } from '../../src/components/zones/zoningWords.ts';
import type { Format } from '../../src/lib/format.ts';

/** Names of sentences with what is put into them, so that a wording may change. */
const t = (key: string, named: Record<string, unknown> = {}) => (key === 'zones.count' ? `${String(named.n)} zones` : `${key.replace('zones.number.', '')}(${Object.values(named).join(', ')})`);
const format = { percent: (value: number) => `${Math.round(100 * value)} %`, number: (value: number) => String(value), list: (names: readonly string[]) => names.join(' and ') } as Format;
const row = (k: number, score: number, holds: number | null, stability = 0.9) => ({ k, score, holds, stability });
const words = (advisedZones: number, alsoOffer: number[], evidence: ReturnType<typeof row>[]) => numberWords({ advisedZones, alsoOffer, evidence } as unknown as ZoningView, { t, format });

describe('what is said of other numbers of zones', () => {
  it('names the one that stands out more and does not hold', () => {
    expect(words(3, [5], [row(2, 8, 0.99), row(3, 9.1, 0.97), row(4, 8.9, 0.8), row(5, 9.3, 0.51)])).toBe('unsteady(5 zones, 51 %, 97 %)');
  });

  it('says of one that stands out more and holds that the advised one lies in the middle', () => {
    expect(words(3, [4], [row(2, 9, 0.9), row(3, 9.1, 0.9), row(4, 9.15, 0.88)])).toBe('middle(4 zones, 88 %, 90 %)');
  });

  it('names those that are nearly as good, that hold better, or that are found again more surely', () => {
    expect(words(3, [2, 4], [row(2, 8, 0.95), row(3, 9.1, 0.7), row(4, 9.05, 0.68)])).toBe('doubtful(3 zones, 70 %, 70 %) holds(2 zones, 95 %, 70 %) close(4 zones, 68 %, 70 %)');
    expect(words(5, [3, 4], [row(3, 9.05, 0.95, 0.97), row(4, 9.01, 0.78, 0.91), row(5, 9.1, 0.85, 0.67)])).toBe('holds(3 zones, 95 %, 85 %) agrees(4 zones, 91 %, 67 %)');
  });

  it('says nothing of runs of before or of one zone', () => {
    expect(words(3, [], [row(2, 8, null), row(3, 9.1, null)])).toBe('');
    expect(words(1, [2], [row(1, 0, null), row(2, 8, 0.9)])).toBe('');
  });
});

describe('what is said before zones are used', () => {
  it('names the layer and gives shares in percent', () => {
    const warnings: ZoningView['warnings'] = [{ code: 'layer-coverage', about: 'a', figures: { coverage: 0.72, limit: 0.9 } }, { code: 'number-fixed', about: null, figures: { chosen: 3, advised: 2 } }];
    const layers = [{ layerId: 'a', name: 'Flight of June' }] as unknown as ZoningView['layers'];
    expect(warningWords({ warnings, layers }, { t, format })).toEqual(['zones.warning.layer-coverage(72 %, 90 %, Flight of June)', 'zones.warning.number-fixed(3, 2, )']);
  });
});

describe('why a layer has its weight', () => {
  type Layer = ZoningView['layers'][number];
  const layer = (layerId: string, role: Layer['role'], advised: Partial<NonNullable<Layer['advised']>> | null) => ({ layerId, name: layerId.toUpperCase(), role, advised: advised && { weight: 0, about: null, figures: {}, ...advised } }) as Layer;
  const [vigour, soil] = [layer('vigour', 'evidence', { code: 'repeats', about: 'soil' }), layer('soil', 'evidence', { code: 'evidence' })];
  const edges = { correlation: 0.6, excess: 0.3, deviations: 4 };
  const why = (own: Layer) => adviceWords(own, [vigour, soil, own], { t, format });

  it('names the layer it repeats, or the measured layers whose edges it shares', () => {
    expect(why(vigour)).toBe('zones.advice.repeats(SOIL, 0, 0)');
    expect(why(layer('map', 'context', { code: 'context-offered', figures: edges }))).toBe('zones.advice.context-offered(VIGOUR and SOIL, 0, 0)');
  });

  it('does not say of edges that nobody could compare that they lie elsewhere', () => {
    expect(why(layer('map', 'context', { code: 'context-off', figures: edges }))).toBe('zones.advice.context-off(, 0, 0)');
    expect(why(layer('map', 'context', { code: 'context-off' }))).toBe('zones.advice.context-unknown(, 0, 0)');
    expect(why(layer('map', 'context', null))).toBe('');
  });
});
