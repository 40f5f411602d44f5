import { describe, expect, it } from 'vitest';
import { suggestLots } from '../../server/workers/suggestLots.ts';
import { seededRandom, type Random } from '../../shared/analysis/random.ts';
import { lotChoices, type ChoiceRules, type ChoiceTank, type ChoiceZone, type LotChoice } from '../../shared/cellar/lotChoices.ts';
import { greedyChoice, programmeCost } from '../../shared/cellar/lotProgramme.ts';
import { whyLeftOut, whyPlaced } from '../../shared/cellar/lotReasons.ts';
import { pickDays } from '../../shared/cellar/pickDays.ts';

const exactly = (value: number, standardError = 0) => ({ value, standardError, df: Infinity });

function zone(id: string, facts: { tonnes: number; brix: number | null; error?: number; variety?: string; wineType?: string }): ChoiceZone {
  const { tonnes, brix, error = 0.05 * facts.tonnes, variety = 'Carignan', wineType = 'red' } = facts;
  return { id, variety, wineType, tonnes: exactly(tonnes, error), values: { brix: brix === null ? null : { mean: brix, sd: 1 }, ph: null, ta: null } };
}

const tank = (id: string, volumeL: number, minimumL = 0): ChoiceTank => ({ id, volumeL, fillShare: 0.8, minimumL });

function rules(changes: Partial<ChoiceRules> = {}): ChoiceRules {
  return { together: [], targets: {}, litresPerT: { red: exactly(800), white: exactly(600) }, leastChance: 0.8, dayTonnes: null, pressTonnes: null, ...changes };
}

/** Every set of choices that shares no zone and no tank, one after the other: slow, and cannot be wrong in the same way. */
function cheapestByHand(zones: readonly ChoiceZone[], choices: readonly LotChoice[]): number {
  let best = Infinity;
  const chosen: LotChoice[] = [];
  const walk = (from: number): void => {
    best = Math.min(best, programmeCost(zones, chosen));
    for (let k = from; k < choices.length; k++) {
      const next = choices[k]!;
      if (chosen.some((one) => one.tank === next.tank || one.zones.some((index) => next.zones.includes(index)))) continue;
      chosen.push(next);
      walk(k + 1);
      chosen.pop();
    }
  };
  walk(0);
  return best;
}

function simulated(random: Random): { zones: ChoiceZone[]; tanks: ChoiceTank[] } {
  const zones = Array.from({ length: 3 + Math.floor(random() * 3) }, (_, index) => zone(String(index), { tonnes: 2 + 6 * random(), brix: 21 + 4 * random(), variety: random() < 0.5 ? 'Carignan' : 'Cinsault', wineType: random() < 0.8 ? 'red' : 'white' }));
  const tanks = Array.from({ length: 1 + Math.floor(random() * 3) }, (_, index) => tank(String(index), 8000 + 14_000 * random(), random() < 0.5 ? 1500 : 0));
  return { zones, tanks };
}

describe('suggested lots', () => {
  it('cost no more than the cheapest found by trying everything', async () => {
    const random = seededRandom(41);
    let grouped = 0;
    for (let round = 0; round < 14; round++) {
      const { zones, tanks } = simulated(random);
      const asked = rules({ together: round % 2 === 0 ? [['Carignan', 'Cinsault']] : [], dayTonnes: round % 3 === 0 ? 12 : null });
      const answer = await suggestLots({ zones, tanks, rules: asked, limitSeconds: 5 });
      expect(answer.provedBest).toBe(true);
      expect(programmeCost(zones, answer.lots)).toBeCloseTo(cheapestByHand(zones, lotChoices(zones, tanks, asked).choices), 4);
      grouped += answer.lots.filter((lot) => lot.zones.length > 1).length;
    }
    // Otherwise the comparison would only be one of single zones.
    expect(grouped).toBeGreaterThan(5);
  });

  it('put together what is alike when tanks are few', async () => {
    const zones = [zone('early a', { tonnes: 4, brix: 24 }), zone('late a', { tonnes: 4, brix: 21 }), zone('early b', { tonnes: 4, brix: 24.2 }), zone('late b', { tonnes: 4, brix: 21.1 })];
    const tanks = [tank('T1', 9000), tank('T2', 9000)];
    const { lots } = await suggestLots({ zones, tanks, rules: rules(), limitSeconds: 5 });
    expect(lots.map((lot) => lot.zones).sort((a, b) => a[0]! - b[0]!)).toEqual([[0, 2], [1, 3]]);
    const reason = whyPlaced(0, lots.find((lot) => lot.zones.includes(0))!, { zones, lots, tanks, rules: rules() });
    // 0.1 °Brix from its own lot's mean of 24.1; with the two late ones the mean would be 22.033, 1.967 away. 9600 L do not fit 7200.
    expect(reason).toMatchObject({ code: 'alike', nearest: { lot: lots.findIndex((lot) => lot.zones.includes(1)), against: { code: 'tooBig', limit: 7200 } } });
    expect(reason.distance).toBeCloseTo(0.1, 10);
    expect(reason.nearest!.distance).toBeCloseTo(1.9667, 4);
    expect(reason.nearest!.against).toMatchObject({ litres: 9600 });
  });

  it('name what stands against the nearest other lot, and nothing where only the sum of all lots does', () => {
    const zones = [zone('a', { tonnes: 4, brix: 23 }), zone('b', { tonnes: 4, brix: 25 }), zone('c', { tonnes: 4, brix: 22.9 })];
    const tanks = [tank('T1', 20_000), tank('T2', 20_000)];
    const [pair, single] = [[0, 1], [2]].map((of, tank): LotChoice => ({ zones: of, tank, cost: 0, tonnes: 4 * of.length, chanceOfFit: 1, chanceBelowMinimum: 0 }));
    const against = (at: number, asked: ChoiceRules) => whyPlaced(at, at === 2 ? single! : pair!, { zones, lots: [pair!, single!], tanks, rules: asked }).nearest!;
    // With c its mean would be 22.95 °Brix.
    expect(against(0, rules())).toEqual({ lot: 1, distance: expect.closeTo(0.05, 10), against: null });
    expect(against(0, rules({ dayTonnes: 7 })).against).toEqual({ code: 'overDay', tonnes: 8, limit: 7 });
    // What would stay is b alone, at 25.
    expect(against(0, rules({ targets: { brix: { low: 22, high: 24.5 } } })).against).toEqual({ code: 'leavesLot', measure: 'brix', value: 25 });
    expect(against(2, rules({ dayTonnes: 9 })).against).toEqual({ code: 'overDay', tonnes: 12, limit: 9 });
    expect(against(2, rules()).against).toBeNull();
  });

  it('honour the chance that a lot fits, not only its expected volume', () => {
    // 9 600 L fit; 9 200 L expected with 600 L of error: 74.75 % by the normal distribution (tables: Φ(0.667) = 0.7476).
    const zones = [zone('a', { tonnes: 11.5, brix: 23, error: 0.75 })];
    expect(lotChoices(zones, [tank('T1', 12_000)], rules({ leastChance: 0.8 })).choices).toEqual([]);
    const [only] = lotChoices(zones, [tank('T1', 12_000)], rules({ leastChance: 0.7 })).choices;
    expect(only!.chanceOfFit).toBeCloseTo(0.7475, 3);
    expect(whyLeftOut(zones[0]!, [tank('T1', 12_000)], rules({ leastChance: 0.8 }))).toMatchObject({ code: 'tooBig', litres: 9200, limit: 9600 });
  });

  it('never mix wines, nor varieties unless told so', () => {
    const zones = [zone('a', { tonnes: 3, brix: 23 }), zone('b', { tonnes: 3, brix: 23, variety: 'Cinsault' }), zone('c', { tonnes: 3, brix: 23, wineType: 'white' })];
    const groups = (asked: ChoiceRules) => lotChoices(zones, [tank('T1', 20_000)], asked).choices.map((choice) => choice.zones.join());
    expect(groups(rules())).toEqual(['0', '1', '2']);
    expect(groups(rules({ together: [['Carignan', 'Cinsault']] }))).toEqual(['0', '0,1', '1', '2']);
  });

  it('keep to targets and to what a day takes in, and say which stood against a zone', () => {
    const zones = [zone('ripe', { tonnes: 3, brix: 24 }), zone('green', { tonnes: 3, brix: 20 }), zone('unread', { tonnes: 3, brix: null }), zone('large', { tonnes: 30, brix: 24 })];
    const asked = rules({ targets: { brix: { low: 23, high: null } }, dayTonnes: 10 });
    const tanks = [tank('T1', 40_000)];
    expect(lotChoices(zones, tanks, asked).choices.map((choice) => choice.zones)).toEqual([[0]]);
    expect(whyLeftOut(zones[1]!, tanks, asked)).toEqual({ code: 'outsideTarget', measure: 'brix', value: 20 });
    expect(whyLeftOut(zones[2]!, tanks, asked)).toEqual({ code: 'notRead', measure: 'brix' });
    expect(whyLeftOut(zones[3]!, tanks, asked)).toEqual({ code: 'overDay', tonnes: 30, limit: 10 });
  });

  it('of white and rosé are no larger than the press takes on a day; red waits for no press', () => {
    const zones = [zone('a', { tonnes: 4, brix: 21, wineType: 'white' }), zone('b', { tonnes: 3, brix: 21, wineType: 'white' }), zone('c', { tonnes: 9, brix: 21, wineType: 'white' }), zone('d', { tonnes: 9, brix: 24 })];
    const tanks = [tank('T1', 40_000)];
    const groups = (asked: ChoiceRules) => lotChoices(zones, tanks, asked).choices.map((choice) => choice.zones.join());
    expect(groups(rules())).toEqual(['0', '0,1', '0,1,2', '0,2', '1', '1,2', '2', '3']);
    expect(groups(rules({ dayTonnes: 20, pressTonnes: 7 }))).toEqual(['0', '0,1', '1', '3']);
    expect(groups(rules({ dayTonnes: 20, pressTonnes: 6 }))).toEqual(['0', '1', '3']);
    expect(whyLeftOut(zones[2]!, tanks, rules({ dayTonnes: 20, pressTonnes: 6 }))).toEqual({ code: 'overPress', tonnes: 9, limit: 6 });
    expect(whyLeftOut(zones[3]!, tanks, rules({ dayTonnes: 20, pressTonnes: 6 }))).toEqual({ code: 'noTankLeft' });
  });

  it('come back in the time given, and say when they are not proved best', async () => {
    const random = seededRandom(5);
    const zones = Array.from({ length: 40 }, (_, index) => zone(String(index), { tonnes: 1 + random(), brix: 21 + 4 * random() }));
    const tanks = Array.from({ length: 8 }, (_, index) => tank(String(index), 9000));
    const answer = await suggestLots({ zones, tanks, rules: rules(), limitSeconds: 2 });
    expect(answer.provedBest).toBe(false);
    expect(answer.lots.length).toBeGreaterThan(0);
    const placed = answer.lots.flatMap((lot) => lot.zones);
    expect(new Set(placed).size).toBe(placed.length);
    expect(new Set(answer.lots.map((lot) => lot.tank)).size).toBe(answer.lots.length);
  });
  it('place nearly all of many zones, though their groupings are too many to look at all', async () => {
    const random = seededRandom(8);
    const varieties = ['Carignan', 'Cinsault', 'Syrah', 'Merlot'];
    const zones = Array.from({ length: 40 }, (_, index) => zone(String(index), { tonnes: 11 + 4 * random(), brix: 22 + 3 * random(), variety: varieties[index % 4]! }));
    const tanks = Array.from({ length: 20 }, (_, index) => tank(String(index), [20_000, 32_000, 48_000, 80_000, 120_000][index % 5]!));
    const answer = await suggestLots({ zones, tanks, rules: rules({ together: [varieties] }), limitSeconds: 3 });
    const placed = answer.lots.flatMap((lot) => lot.zones);
    expect(answer.provedBest).toBe(false);
    expect(new Set(placed).size).toBe(placed.length);
    expect(placed.length).toBeGreaterThan(36);
    expect(new Set(answer.lots.map((lot) => lot.tank)).size).toBe(answer.lots.length);
    const usable = (lot: LotChoice) => tanks[lot.tank]!.volumeL * 0.8;
    expect(answer.lots.every((lot) => lot.tonnes * 800 <= usable(lot))).toBe(true);
  });

  it('are never worse than taking what places most, again and again', () => {
    const random = seededRandom(9);
    for (let round = 0; round < 20; round++) {
      const { zones, tanks } = simulated(random);
      const { choices } = lotChoices(zones, tanks, rules());
      const taken = greedyChoice(tanks, choices);
      const placed = taken.flatMap((lot) => lot.zones);
      expect(new Set(placed).size).toBe(placed.length);
      expect(programmeCost(zones, taken)).toBeGreaterThanOrEqual(cheapestByHand(zones, choices) - 1e-9);
      expect(programmeCost(zones, taken)).toBeLessThanOrEqual(programmeCost(zones, []));
    }
  });

  it('use tanks that are alike as often as there are of them', async () => {
    const zones = ['a', 'b', 'c'].map((id, index) => zone(id, { tonnes: 5, brix: 21 + 2 * index }));
    const answer = await suggestLots({ zones, tanks: [tank('T1', 6500), tank('T2', 6500)], rules: rules(), limitSeconds: 5 });
    expect(answer.lots.map((lot) => lot.tank).sort()).toEqual([0, 1]);
    expect(answer.provedBest).toBe(true);
  });
});

describe('days for lots', () => {
  const days = ['2026-09-10', '2026-09-11'].map((day) => ({ day, pickT: 10, pressT: 4 }));

  it('are the first with room, not before a lot may be picked', () => {
    const lots = [{ tonnes: 6, pressed: false, earliest: null }, { tonnes: 6, pressed: false, earliest: null }, { tonnes: 3, pressed: false, earliest: '2026-09-11' }];
    expect(pickDays(lots, days)).toEqual(['2026-09-10', '2026-09-11', '2026-09-11']);
  });

  it('mind the press for white and rosé only, and are none where nothing is left', () => {
    const lots = [{ tonnes: 4, pressed: true, earliest: null }, { tonnes: 4, pressed: true, earliest: null }, { tonnes: 1, pressed: true, earliest: null }, { tonnes: 6, pressed: false, earliest: null }];
    expect(pickDays(lots, days)).toEqual(['2026-09-10', '2026-09-11', null, '2026-09-10']);
  });
});
