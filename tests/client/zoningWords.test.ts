import { describe, expect, it } from 'vitest';
import type { ZoningView } from '../../shared/contracts/zonings.ts';
import { adviceWords, agreementWord, layerName, numberWords, overruledAdvice, verdictWords, warningWords } from '../../src/components/zones/zoningWords.ts';
import { createFormat, type Format } from '../../src/lib/format.ts';

/** Names of sentences with what is put into them, so that a wording may change. */
const t = (key: string, named: Record<string, unknown> = {}) => (key === 'zones.count' ? `${String(named.n)} zones` : `${key.replace('zones.number.', '')}(${Object.values(named).join(', ')})`);
const format = { percent: (value: number) => `${Math.round(100 * value)} %`, number: (value: number) => String(value), list: (names: readonly string[]) => names.join(' and ') } as Format;
const row = (k: number, score: number, holds: number | null, stability = 0.9, calmWithin: number | null = null) => ({ k, score, holds, stability, calmWithin });
const words = (advisedZones: number, alsoOffer: number[], evidence: ReturnType<typeof row>[]) => numberWords({ advisedZones, alsoOffer, evidence } as unknown as ZoningView, { t, format });

describe('what is said of other numbers of zones', () => {
  it('names the one that stands out more and does not hold', () => {
    expect(words(3, [5], [row(2, 8, 0.99), row(3, 9.1, 0.97), row(4, 8.9, 0.8), row(5, 9.3, 0.51)])).toBe('unsteady(5 zones, 51 %, 97 %)');
  });

  it('says of one that stands out more and holds that the advised one lies in the middle', () => {
    expect(words(3, [4], [row(2, 9, 0.9), row(3, 9.1, 0.9), row(4, 9.15, 0.88)])).toBe('middle(4 zones, 88 %, 90 %)');
  });

  it('says of one that stands out more where hardly anything is left to part that enough is parted', () => {
    const left = (two: number) => [row(2, 2.2, 0.99, 0.99, two), row(3, 2.4, 0.97, 0.96, 0.02), row(4, 2.25, 0.6, 0.95, 0.012)];
    expect(words(2, [3, 4], left(0.04))).toBe('enough(3 zones, 2 %, 4 %) enough(4 zones, 1 %, 4 %)');
    expect(words(2, [3, 4], left(0.06))).toBe('middle(3 zones, 97 %, 99 %) unsteady(4 zones, 60 %, 99 %)');
    // A number below the advised one parts less: what the advised one leaves speaks not against it.
    expect(words(3, [2], [row(2, 2.5, 0.99, 0.99, 0.06), row(3, 2.4, 0.97, 0.96, 0.02)])).toBe('middle(2 zones, 99 %, 97 %)');
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

describe('how far the zones are apart', () => {
  const metric = createFormat({ language: 'en', units: 'metric' });
  const sentence = (key: string, named: Record<string, unknown> = {}) => `${key}(${JSON.stringify(named)})`;
  const layers = [{ layerId: 'map', name: 'Map', type: 'soilClass', unit: '', weight: 1 }, { layerId: 'dem', name: 'Height', type: 'elevation', unit: 'm', weight: 0 }, { layerId: 'ec', name: 'Soil', type: 'conductivity', unit: 'mS/m', weight: 1 }];
  const zone = (...means: number[]) => ({ layers: means.map((mean, at) => ({ layerId: layers[at]!.layerId, n: 100, mean, sd: 2 })) });
  const said = (zones: object[], over: object = {}) => verdictWords({ layers, zones, isJudged: true, verdict: 'several', advisedZones: 2, reasons: [], ...over } as unknown as ZoningView, { t: sentence, format: metric });

  it('is told of the zones that stand on the screen, in a layer that voted', () => {
    const named = { layer: 'Soil', lowest: '20.0', highest: '31.0', unit: '\u202FmS/m', within: '2.0' };
    expect(said([zone(1, 80, 20), zone(3, 90, 31)]).below).toContain(sentence('zones.difference', named));
    expect(said([zone(1, 80, 20), zone(2, 85, 26), zone(3, 90, 44)]).below).toContain(sentence('zones.difference', { ...named, highest: '44.0' }));
    expect(said([zone(1, 80, 20)]).below).not.toContain('zones.difference');
  });

  it('names the ground that stands out in the reader’s own unit', () => {
    const reasons = [{ code: 'stands-out', about: null, figures: { hectares: 0.2 } }];
    const acres = createFormat({ language: 'en', units: 'us' });
    expect(said([], { reasons }).rest).toContain(`"ground":"${metric.withUnit('area', 0.2, 2)}"`);
    expect(verdictWords({ layers, zones: [], isJudged: true, verdict: 'several', advisedZones: 2, reasons } as unknown as ZoningView, { t: sentence, format: acres }).rest).toContain(`"ground":"${acres.withUnit('area', 0.2, 2)}"`);
    expect(acres.withUnit('area', 0.2, 2)).not.toBe(metric.withUnit('area', 0.2, 2));
  });
});

describe('what fruit says', () => {
  const metric = createFormat({ language: 'en', units: 'metric' });
  const said = (over: object) => verdictWords({ layers: [], zones: [], isJudged: true, advisedZones: 1, verdict: 'one', reasons: [{ code: 'no-structure', about: null, figures: {} }, { code: 'fruit-agrees', about: 'brix', figures: {} }], ...over } as unknown as ZoningView, { t: (key: string, named: Record<string, unknown> = {}) => `${key}(${String(named.n ?? named.zones ?? '')})`, format: metric }).rest;

  it('is not taken for a word on the verdict where other zones than the advised ones were tested', () => {
    expect(said({ fruitZones: 2 })).toBe('zones.reason.no-structure() zones.tried.fruit-agrees(zones.count(2))');
    expect(said({ fruitZones: 2, advisedZones: 2 })).toContain('zones.reason.fruit-agrees()');
    expect(said({ fruitZones: null })).toContain('zones.reason.fruit-agrees()');
  });
});

describe('what is said before zones are used', () => {
  it('names the layer and gives shares in percent', () => {
    const warnings: ZoningView['warnings'] = [{ code: 'layer-coverage', about: 'a', figures: { coverage: 0.72, limit: 0.9 } }, { code: 'number-fixed', about: null, figures: { chosen: 3, advised: 2 } }];
    const layers = [{ layerId: 'a', name: 'Flight of June', type: 'vigour' }] as unknown as ZoningView['layers'];
    expect(warningWords({ warnings, layers }, { t, format })).toEqual(['zones.warning.layer-coverage(72 %, 90 %, Flight of June)', 'zones.warning.number-fixed(3, 2, )']);
  });
});

describe('a layer made from another', () => {
  it('says which of them it is, since it bears the name of the other', () => {
    const named = ['elevation', 'slope', 'northness'].map((type) => layerName({ name: 'Flight over the hill', type }, (key) => key));
    expect(named).toEqual(['Flight over the hill', 'Flight over the hill, zones.layerType.slope', 'Flight over the hill, zones.layerType.northness']);
  });
});

describe('how far zones agree', () => {
  it('is called the same where no vine changes zone, and nearly the same where a few do', () => {
    expect(agreementWord({ adjustedRand: 1, vinesApart: 0 })).toBe('identical');
    expect(agreementWord({ adjustedRand: 0.999, vinesApart: 2 })).toBe('same');
    expect(agreementWord({ adjustedRand: 0.1, vinesApart: 900 })).toBe('chance');
  });
});

describe('why a layer has its weight', () => {
  type Layer = ZoningView['layers'][number];
  const layer = (layerId: string, role: Layer['role'], advised: Partial<NonNullable<Layer['advised']>> | null) => ({ layerId, name: layerId.toUpperCase(), type: 'vigour', role, advised: advised && { weight: 0, about: null, figures: {}, ...advised } }) as Layer;
  const [vigour, soil] = [layer('vigour', 'evidence', { code: 'repeats', about: 'soil', figures: { correlation: 0.95 } }), layer('soil', 'evidence', { code: 'evidence' })];
  const edges = { correlation: 0.6, excess: 0.3, deviations: 4 };
  const why = (own: Layer) => adviceWords(own, [vigour, soil, own], { t, format });

  it('names the layer it repeats, or the measured layers whose edges it shares', () => {
    expect(why(vigour)).toBe('zones.advice.repeats(SOIL, 0.95, 0, 0)');
    expect(why(layer('map', 'context', { code: 'context-offered', figures: edges }))).toBe('zones.advice.context-offered(VIGOUR and SOIL, 0.6, 0, 0)');
  });

  it('does not say of edges that nobody could compare that they lie elsewhere', () => {
    expect(why(layer('map', 'context', { code: 'context-off', figures: edges }))).toBe('zones.advice.context-off(, 0.6, 0, 0)');
    expect(why(layer('map', 'context', { code: 'context-off' }))).toBe('zones.advice.context-unknown(, 0, 0, 0)');
    expect(why(layer('map', 'context', null))).toBe('');
  });

  it('tells an advised weight that was not followed on the scale of those that were given, and none where all are to each other as advised', () => {
    const given = (...pairs: [weight: number, advised: number | null][]) => pairs.map(([weight, advised]) => ({ weight, advised: advised === null ? null : { weight: advised } })) as unknown as Layer[];
    const told = (layers: Layer[]) => layers.map((one) => overruledAdvice(one, layers));
    expect(told(given([1, 1 / 3], [1, 1 / 3], [1, 1 / 3]))).toEqual([null, null, null]);
    expect(told(given([0.5, 0.5], [0.5, 0.5], [0, 0]))).toEqual([null, null, null]);
    expect(told(given([1, 0.5], [1, 0.5], [1, 0]))).toEqual([1.5, 1.5, 0]);
    expect(told(given([3, 1], [1, 1], [2, null]))).toEqual([2, 2, null]);
  });
});
