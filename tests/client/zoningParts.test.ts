import { flushPromises } from '@vue/test-utils';
import { describe, expect, it, vi } from 'vitest';
import { nextTick } from 'vue';
import type { BlockLayerView } from '../../shared/contracts/layers.ts';
import type { EvidenceRow, ZoningRequestOptions, ZoneView, ZoningLine, ZoningView } from '../../shared/contracts/zonings.ts';
import FruitTests from '../../src/components/zones/FruitTests.vue';
import LayerShares from '../../src/components/zones/LayerShares.vue';
import SeasonAgreement from '../../src/components/zones/SeasonAgreement.vue';
import WhyThisMany from '../../src/components/zones/WhyThisMany.vue';
import ZoningForm from '../../src/components/zones/ZoningForm.vue';
import ZoningLayers from '../../src/components/zones/ZoningLayers.vue';
import ZoningRuns from '../../src/components/zones/ZoningRuns.vue';
import ZoningVersions from '../../src/components/zones/ZoningVersions.vue';
import { HttpProblem } from '../../src/lib/httpProblem.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

const layer = (id: string, type: string, measuredOn: string | null) => ({ id, name: id, type, measuredOn, readiness: 'ready', coverage: 1 }) as unknown as BlockLayerView;
const square = (west: number): ZoneView['geometry'] => ({ type: 'MultiPolygon', coordinates: [[[[west, 0], [west + 1, 0], [west + 1, 1], [west, 1], [west, 0]]]] });
const zone = (number: number) => ({ id: null, number, name: '', colour: null, areaM2: 100, vines: 10, missing: 0, doubtfulShare: null, patches: 1, layers: [], geometry: square(number) }) satisfies ZoneView;

describe('what to zone from', () => {
  // As the server lists them: what came last stands first.
  const layers = [layer('Soil map', 'soilClass', null), layer('Height', 'elevation', '2022-02-01'), layer('Conductivity', 'conductivity', '2026-04-16'), layer('Flight 2026', 'vigour', '2026-06-20'), layer('Flight 2025', 'vigour', '2025-06-20')];

  it('asks for layers that vote before those that do not, so that zones are numbered by vines or soil', async () => {
    const form = await mountWithTexts(ZoningForm, { props: { layers } });
    await form.findAll('li input[type=checkbox]').find((box) => textOf(box.element.closest('li')).includes('Height'))!.setValue(true);
    await form.find('form').trigger('submit');
    const [options] = form.emitted('run')![0] as [ZoningRequestOptions];
    expect(options.layers.map(({ layerId }) => layerId)).toEqual(['Flight 2026', 'Conductivity', 'Height']);
    form.unmount();
  });

  it('starts from an earlier run without a layer that was refused since', async () => {
    const before = { layers: ['Flight 2026', 'Conductivity'].map((layerId) => ({ layerId, weight: null })), withBlocks: [] } as unknown as ZoningRequestOptions;
    const form = await mountWithTexts(ZoningForm, { props: { layers: layers.map((one) => (one.id === 'Conductivity' ? { ...one, readiness: 'blocked' as const } : one)), before } });
    await form.find('form').trigger('submit');
    expect((form.emitted('run')![0] as [ZoningRequestOptions])[0].layers.map(({ layerId }) => layerId)).toEqual(['Flight 2026']);
    form.unmount();
  });

  it('does not run with no layer that votes, and says so before it is sent', async () => {
    const weighted = (weight: number) => ({ layers: [{ layerId: 'Flight 2026', weight: 0 }, { layerId: 'Height', weight }], withBlocks: [] }) as unknown as ZoningRequestOptions;
    for (const [weight, isOff] of [[0, true], [0.5, false]] as const) {
      const form = await mountWithTexts(ZoningForm, { props: { layers, before: weighted(weight) } });
      expect(form.text().includes('Every layer has weight 0')).toBe(isOff);
      form.unmount();
    }
  });

  it('names each weight apart where slope bears the name of the height it was made from', async () => {
    const heights = [layer('h', 'elevation', null), { ...layer('s', 'slope', null), name: 'h' }];
    const before = { layers: heights.map(({ id }) => ({ layerId: id, weight: 0.5 })), withBlocks: [] } as unknown as ZoningRequestOptions;
    const form = await mountWithTexts(ZoningForm, { props: { layers: heights, before } });
    const names = form.findAll('.weight').map((field) => textOf(field.find('label').element));
    expect(names).toEqual(['Weight of h', 'Weight of h, slope']);
    form.unmount();
  });

  it('says why it was refused at the button that sent it, where somebody looks', async () => {
    const problem = new HttpProblem({ status: 422, code: 'no-layer', title: 'Cannot be computed', detail: 'No layer is left.' });
    const form = await mountWithTexts(ZoningForm, { props: { layers, problem } });
    const [told, sent] = [form.find('[role=alert]'), form.find('button[type=submit]')];
    expect(told.text()).toContain('No layer is left.');
    expect(textOf(told.element.nextElementSibling)).toContain(sent.text());
    form.unmount();
  });

  it('says of a block without layers that there are none', async () => {
    const form = await mountWithTexts(ZoningForm, { props: { layers: [] }, slots: { none: () => 'the way to them' } });
    expect(form.text()).toContain('No layer lies on this block yet.');
    expect(form.text()).toContain('the way to them');
    expect(form.text()).not.toContain('Set weights myself');
    form.unmount();
  });

  it('tells of two layers of one kind which year each is of', async () => {
    const form = await mountWithTexts(ZoningForm, { props: { layers } });
    for (const year of ['2026', '2025']) expect(textOf(form.findAll('li').find((line) => line.text().includes(`Flight ${year}`))!.element)).toMatch(new RegExp(`20 June? ${year}`));
    form.unmount();
    const list = await mountWithTexts(ZoningLayers, { props: { layers: [{ layerId: 'a', name: 'Flight', type: 'vigour', unit: '', measuredOn: '2025-06-20', role: 'evidence', weight: 1, advised: null }] } });
    expect(list.text()).toContain('2025');
    list.unmount();
  });
});

describe('what each layer adds', () => {
  const layers = [['a', 'Flight', 'vigour'], ['b', 'Soil', 'conductivity'], ['c', 'Map', 'soilClass']].map(([layerId, name, type]) => ({ layerId, name, type }));
  const zoning = (layerPairs: ZoningView['layerPairs']) => ({ layers, layerPairs }) as unknown as ZoningView;
  const zones = [1, 2].map((number) => ({ ...zone(number), layers: [{ layerId: 'a', n: 50, mean: number, sd: 0.5 }, { layerId: 'b', n: 50, mean: 20, sd: 3 }] }));
  const linesOf = async (props: { zoning: ZoningView; zones: ZoneView[] }) => {
    const part = await mountWithTexts(LayerShares, { props });
    const lines = part.findAll('tbody tr').map((line) => line.findAll('th, td').map((cell) => textOf(cell.element)));
    part.unmount();
    return lines;
  };

  it('is told of the zones shown, with the layer that is most like it; of classes there is nothing to tell', async () => {
    const pairs = [{ one: 'a', other: 'b', correlation: 0.954 }];
    expect(await linesOf({ zoning: zoning(pairs), zones })).toEqual([['Flight', '50 %', 'Soil (0.95)'], ['Soil', '0 %', 'Flight (0.95)']]);
    expect(await linesOf({ zoning: zoning(pairs), zones: [zones[0]!] })).toEqual([['Flight', 'Soil (0.95)'], ['Soil', 'Flight (0.95)']]);
    expect(await linesOf({ zoning: zoning([]), zones })).toEqual([['Flight', '50 %'], ['Soil', '0 %']]);
    expect(await linesOf({ zoning: zoning([]), zones: [zones[0]!] })).toEqual([]);
  });

  it('has its heads on a phone too, where a line has only those that a cell brings along', async () => {
    const part = await mountWithTexts(LayerShares, { props: { zoning: zoning([{ one: 'a', other: 'b', correlation: 0.954 }]), zones } });
    expect(part.findAll('tbody tr')[0]!.findAll('td.phone-second').map((cell) => cell.attributes('data-head'))).toEqual(['Lies between zones', 'Most alike']);
    part.unmount();
  });
});

describe('a run beside another', () => {
  const line = (id: string, number: number) => ({ id, number, name: '', state: 'proposed', isStopped: false, pastSeason: null, createdAt: '2026-06-20T10:00:00Z' }) as unknown as ZoningLine;
  const view = (id: string, number: number, zones: ZoneView[]) => ({ ...line(id, number), zones }) as unknown as ZoningView;

  it('shows the zones that were counted and says how many they are, whatever the page shows since', async () => {
    const compared = { zones: [zone(1), zone(2), zone(4)], other: view('b', 2, [zone(1), zone(2)]), comparison: { vines: 30, vinesMoved: 3, vinesApart: 3, adjustedRand: 0.9, pairs: [{ from: 4, to: 2, vines: 7 }] } };
    const page = await mountWithTexts(ZoningVersions, { props: { zoning: view('a', 1, [zone(1), zone(2)]), others: [line('a', 1), line('b', 2)], compared } });
    await page.find('select').setValue('b');
    await flushPromises();
    expect(page.findAll('figcaption').map((caption) => textOf(caption.element).split(', ').at(-1))).toEqual(['3 zones', '2 zones']);
    expect(page.findAll('tbody tr')).toHaveLength(3);
    // The third of them is number 4 and keeps the look it has on the map, where four is the highest number.
    const fills = (at: number) => page.findAll('svg[role=img]')[at]!.findAll('path[fill]').map((path) => path.attributes('fill')!).filter((fill) => fill.startsWith('#'));
    const swatches = page.findAll('tbody th').map((head) => head.html());
    fills(0).forEach((fill, at) => expect(swatches[at]).toContain(fill));
    page.unmount();
  });
});

describe('saved runs', () => {
  const run = (id: string, over: Partial<ZoningLine>) => ({ id, number: 1, name: '', state: 'live', isStopped: false, pastSeason: null, createdBy: null, createdAt: '2026-06-20T10:00:00Z', verdict: null, ...over }) as ZoningLine;

  it('name the season of zones in force that are no more those of today, here and to compare with', async () => {
    const runs = [run('a', {}), run('b', { pastSeason: '2025' }), run('c', { state: 'draft', pastSeason: '2025' }), run('d', { state: 'failed', isStopped: true })];
    const table = await mountWithTexts(ZoningRuns, { props: { runs, here: 'a', estateId: 'e', blockId: 'b' } });
    expect(table.findAll('tbody tr').map((line) => textOf(line.find('.chip').element))).toEqual(['In force', 'In force in 2025', 'Draft', 'Stopped']);
    table.unmount();
    const beside = await mountWithTexts(ZoningVersions, { props: { zoning: { ...runs[0], zones: [] } as unknown as ZoningView, others: runs, compared: null } });
    expect(textOf(beside.find('option[value=b]').element)).toContain('In force in 2025');
    beside.unmount();
  });
});

describe('other seasons', () => {
  const other = (adjustedRand: number) => ({ zoningId: 'z', number: 1, season: '2025', zones: 3, ownZones: 3, adjustedRand, vinesApart: 694, vines: 11785 });
  const said = async (adjustedRand: number, shown: number) => {
    const part = await mountWithTexts(SeasonAgreement, { props: { seasons: { zones: [other(adjustedRand)], layers: [], ground: [] }, shown, ground: null } });
    const words = textOf(part.find('li').element);
    part.unmount();
    return words;
  };

  it('say with which number the run is compared only where the page shows another', async () => {
    expect(await said(0.84, 3)).toContain('Compared are 3 zones of this run with 3 zones of that season.');
    expect(await said(0.84, 4)).toContain('Compared are 3 zones of this run, not the 4 zones shown above, with 3 zones of that season.');
  });

  it.each([[0.84, 'What was learned of the zones of 2025 largely holds for these.'], [0.5, 'Walk the ground that changes zone before you rely on its borders.'], [0.2, 'Little of what was learned then holds for these'], [0, 'Little of what was learned then holds for these']])('say what an agreement of %f is good for', async (adjustedRand, act) => {
    expect(await said(adjustedRand, 3)).toContain(act);
  });
});

describe('a frame that scrolls sideways', () => {
  const rows = [1, 2].map((k) => ({ k, silhouette: 0.5, varianceExplained: 0.5, stability: 0.9, holds: null, gap: 1, smallestZoneHa: 1, hours: 1 })) as unknown as EvidenceRow[];

  it.each([[560, { tabindex: '0', role: 'region', 'aria-label': 'One to six zones compared' }], [358, {}]])('of %i px in 358 has a tab stop of its own only where keys can scroll it', async (scrollWidth, stop) => {
    let look: () => void = () => undefined;
    vi.stubGlobal('ResizeObserver', class { observe = () => undefined; disconnect = () => undefined; constructor(callback: () => void) { look = callback; } });
    const part = await mountWithTexts(WhyThisMany, { props: { rows, pictures: new Map(), advised: 2, smallestPatchHa: 0.05, shown: 1 } });
    const { element } = part.find('.scroll');
    for (const [name, value] of Object.entries({ scrollWidth, clientWidth: 358 })) Object.defineProperty(element, name, { value });
    look();
    await nextTick();
    const { tabindex, role, 'aria-label': label } = part.find('.scroll').attributes();
    expect({ tabindex, role, 'aria-label': label }).toEqual({ tabindex: undefined, role: undefined, 'aria-label': undefined, ...stop });
    part.unmount();
    vi.unstubAllGlobals();
  });
});

describe('zones tested on fruit', () => {
  const zoning = (fruitZones: number) => ({ fruitZones, options: { zones: 'advise' }, advisedZones: 1, fruit: [{ measure: 'brix', on: ['2026-08-01'], n: 40, f: 1.2, dfBetween: 1, dfWithin: 38, omegaSquared: 0.01, leaveOneOutRSquared: 0, p: 0.3, shuffle: 'rows' }] }) as unknown as ZoningView;

  it('says how many zones were tested where the page shows another number, as with a block that is one', async () => {
    for (const [shown, said] of [[1, true], [2, false], [3, true]] as const) {
      const part = await mountWithTexts(FruitTests, { props: { zoning: zoning(2), shown } });
      expect(part.text().includes('Tested with 2 zones'), `${shown}`).toBe(said);
      part.unmount();
    }
  });

  it('shows on a phone the chance that its words speak of', async () => {
    const part = await mountWithTexts(FruitTests, { props: { zoning: zoning(2), shown: 2 } });
    expect(part.findAll('tbody td.phone-second').map((cell) => [cell.attributes('data-head'), textOf(cell.element)])).toEqual([['Readings', '40'], ['Lies between zones', '1 %'], ['Chance does as well', '0.300']]);
    part.unmount();
  });
});
