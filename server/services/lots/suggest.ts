import { scaled } from '../../../shared/cellar/dependent.ts';
import { isPressed, type ChoiceRules, type ChoiceTank, type ChoiceZone, type LotChoice } from '../../../shared/cellar/lotChoices.ts';
import { whyLeftOut, whyPlaced } from '../../../shared/cellar/lotReasons.ts';
import { pickDays, type DayRoom } from '../../../shared/cellar/pickDays.ts';
import type { NewSuggestion, SuggestionView } from '../../../shared/contracts/suggestions.ts';
import { wineTypes, type WineType } from '../../../shared/contracts/lots.ts';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { isBearing } from '../../ground/blockVines.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { EntryRestriction } from '../../models/EntryRestriction.ts';
import { Lot } from '../../models/Lot.ts';
import { Scenario } from '../../models/Scenario.ts';
import { Tank } from '../../models/Tank.ts';
import { runCompute } from '../../workers/computePool.ts';
import type { SuggestAnswer, SuggestInput } from '../../workers/suggestLots.ts';
import { findScenario } from './board.ts';
import { loadBoardGround, type BoardGround } from './boardGround.ts';
import { roomFrom } from './capacities.ts';
import { requireFruitDay } from './fruitDay.ts';
import { addPart } from './changeLots.ts';
import { copyLots } from './scenarios.ts';
import { mustPerTonne } from './summariseLot.ts';
import { usedFactors } from './usedFactors.ts';
import type { UsedFactors } from './zoneOutlook.ts';
import { say } from '../../sentences/say.ts';

const limitSeconds = 6;
/** A part of a zone with fewer bearing vines is not worth a picker's walk. */
const leastBearing = 10;

/** A zone, or what is free of it, with what is needed to put it into a lot. */
interface FreeZone extends ChoiceZone {
  name: string;
  rowIds: string[] | null;
  earliest: string | null;
}

/** Proposes lots as a what-if of their own, each placing with its reason. The lots in force stay as they are. */
export async function suggestScenario(access: Access, asked: NewSuggestion, options: { today: string }): Promise<{ id: string }> {
  const live = await findScenario(access, { scenarioId: null, today: options.today });
  await requireFruitDay(undefined, live, asked.firstDay);
  const factors = await usedFactors(access.estateId);
  const ground = await loadBoardGround(access.estateId, live, factors);
  const kept = ground.lots.filter((lot) => !asked.startOver || lot.state !== 'draft');
  const zones = freeZones(ground, { kept, asked, earliest: await earliestDays(access.estateId, asked.firstDay) });
  const tanks = await freeTanks(access.estateId, { kept, asked });
  if (ground.blocks.every((block) => block.zones.length === 0)) throw new Unusable('noZones', say('noZonesForLots'));
  if (zones.length === 0) throw new Unusable('nothingFree', say('nothingFree'));
  if (tanks.length === 0) throw new Unusable('noTankFree', say('noTankFree'));
  const room = await roomFrom(access, asked);
  const rules = rulesOf(asked, { factors, room });
  const answer = await runCompute<SuggestAnswer>('suggestLots', { zones: zones.map(plain), tanks: tanks.map(({ name: _name, ...tank }) => tank), rules, limitSeconds } satisfies SuggestInput, { lane: 'quick' });
  const leftOut = (placed: ReadonlySet<number>) => zones.flatMap((zone, index) => (placed.has(index) ? [] : [{ zoneId: zone.id, zone: zone.name, reason: whyLeftOut(zone, tanks, rules) }]));
  if (answer.groupings === 0) throw new Unusable('nothingFits', say('nothingFits'), { leftOut: leftOut(new Set()) });
  if (answer.lots.length === 0) throw new Unusable('notFoundInTime', say('notFoundInTime', { seconds: limitSeconds }));
  const lots = answer.lots.map((lot) => ({ lot, own: lot.zones.map((index) => zones[index]!) }));
  const days = pickDays(
    lots.map(({ lot, own }) => ({
      tonnes: lot.tonnes,
      pressed: isPressed(own[0]!),
      earliest: own.reduce<string | null>(
        (latest, { earliest }) => (earliest !== null && (latest === null || earliest > latest) ? earliest : latest),
        null,
      ),
    })),
    room,
  );
  const names = lotNames(lots.map(({ own }) => own), kept.map(({ name }) => name));
  const placed = new Set(answer.lots.flatMap((lot) => lot.zones));
  const whyHere = (zone: number, lot: LotChoice) => {
    const { nearest, ...reason } = whyPlaced(zone, lot, { zones, lots: answer.lots, tanks, rules });
    return { ...reason, nearest: nearest && { lotName: names[nearest.lot]!, distance: nearest.distance, against: nearest.against } };
  };
  const suggestion: SuggestionView = {
    asked,
    madeOn: options.today,
    provedBest: answer.provedBest,
    groupings: answer.groupings,
    roomKnown: room.some(({ pickT, pressT }) => pickT !== null || pressT !== null),
    lots: lots.map(({ lot }, at) => ({
      lotName: names[at]!,
      tank: tanks[lot.tank]!.name,
      chanceOfFit: lot.chanceOfFit,
      pickOn: days[at] ?? null,
      zones: lot.zones.map((zone) => ({ zoneId: zones[zone]!.id, zone: zones[zone]!.name, reason: whyHere(zone, lot) })),
    })),
    leftOut: leftOut(placed),
  };
  return store(access, { live, kept, suggestion, made: lots.map(({ lot, own }, at) => ({ lot, own, name: names[at]!, pickOn: days[at] ?? null, tankId: tanks[lot.tank]!.id })) });
}

interface MadeLot {
  lot: LotChoice;
  own: readonly FreeZone[];
  name: string;
  pickOn: string | null;
  tankId: string;
}

async function store(access: Access, facts: { live: Scenario; kept: readonly Lot[]; suggestion: SuggestionView; made: readonly MadeLot[] }): Promise<{ id: string }> {
  const { live, kept, suggestion, made } = facts;
  return Scenario.transaction(async (trx) => {
    const scenario = await Scenario.query(trx).insert({ estateId: access.estateId, seasonId: live.seasonId, name: suggestion.asked.name, isLive: false, suggestion, createdBy: access.personId });
    await copyLots(trx, access, { lots: kept, to: scenario });
    for (const { own, name, pickOn, tankId } of made) {
      const lot = await Lot.query(trx).insertAndFetch({ estateId: access.estateId, scenarioId: scenario.id, seasonId: live.seasonId, name, wineType: own[0]!.wineType as WineType, pickOn, tankId, createdBy: access.personId });
      for (const { id, rowIds } of own) await addPart(trx, access, lot, { zoneId: id, rowIds });
    }
    await writeAudit(trx, access, { action: 'lots.suggest', subjectType: 'scenario', subjectId: scenario.id, subjectName: suggestion.asked.name, after: suggestion.asked });
    return { id: scenario.id };
  });
}

function freeZones(ground: BoardGround, how: { kept: readonly Lot[]; asked: NewSuggestion; earliest: ReadonlyMap<string, string> }): FreeZone[] {
  const isKept = ground.lots.map((lot) => how.kept.includes(lot));
  return ground.blocks.flatMap((block) =>
    block.zones.flatMap((zone, at) => {
      const outlook = block.outlooks[at]!;
      const vines = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone.number);
      const taken = new Set(vines.filter((vine) => block.lotOf[vine]! >= 0 && isKept[block.lotOf[vine]!]).map((vine) => block.ground.vines.row[vine]!));
      const free = vines.filter((vine) => !taken.has(block.ground.vines.row[vine]!));
      const bearing = free.filter((vine) => isBearing(block.ground.states[vine]!)).length;
      if (bearing < leastBearing || outlook.bearing === 0) return [];
      const share = bearing / outlook.bearing;
      const value = (code: 'brix' | 'ph' | 'ta') => {
        const found = outlook.latest[code];
        return found === null || !Number.isFinite(found.sd) ? null : { mean: found.mean, sd: found.sd };
      };
      return [{
        id: zone.id, name: `${block.ground.block.name} ${zone.number}`, variety: block.ground.block.variety,
        wineType: how.asked.wines[block.ground.block.variety] ?? 'red',
        tonnes: scaled(outlook.tonnes, share),
        values: { brix: value('brix'), ph: value('ph'), ta: value('ta') },
        rowIds: taken.size === 0 ? null : [...new Set(free.map((vine) => block.ground.stored[block.ground.vines.row[vine]!]!.id))],
        earliest: how.earliest.get(block.ground.block.id) ?? null,
      }];
    }),
  );
}

/** First day each block may be picked by the intervals that people entered; one that names rows holds the whole block here. */
async function earliestDays(estateId: string, firstDay: string): Promise<Map<string, string>> {
  const { timeZone } = await Estate.query().findById(estateId).throwIfNotFound();
  const rows = (await EntryRestriction.query()
    .where({ estateId })
    .where((holds) =>
      holds
        .where((closed) => closed.whereNull('liftedAt').whereRaw('(ends_at at time zone ?) > ?::timestamp', [timeZone, firstDay]))
        .orWhere('noPickBefore', '>', firstDay),
    )
    .select(
      'blockId',
      'noPickBefore',
      EntryRestriction.raw(
        "case when lifted_at is null then to_char((ends_at at time zone ?) - interval '1 second' + interval '1 day', 'YYYY-MM-DD') end as \"openOn\"",
        [timeZone],
      ),
    )) as unknown as { blockId: string; noPickBefore: string | null; openOn: string | null }[];
  const first = new Map<string, string>();
  for (const { blockId, noPickBefore, openOn } of rows) {
    for (const day of [noPickBefore, openOn]) if (day !== null && day > (first.get(blockId) ?? '')) first.set(blockId, day);
  }
  return first;
}

async function freeTanks(estateId: string, { kept, asked }: { kept: readonly Lot[]; asked: NewSuggestion }): Promise<(ChoiceTank & { name: string })[]> {
  const rows = await Tank.query().where({ estateId }).whereNull('retiredAt').orderBy('name');
  return rows
    .filter(({ id }) => (asked.tankIds === null || asked.tankIds.includes(id)) && !kept.some((lot) => lot.tankId === id))
    .map(({ id, name, litres, workingFill, minimumFill }) => ({ id, name, volumeL: litres, fillShare: workingFill, minimumL: litres * minimumFill }));
}

function rulesOf(asked: NewSuggestion, { factors, room }: { factors: UsedFactors; room: readonly DayRoom[] }): ChoiceRules {
  // The roomiest day decides what can be a lot at all; `pickDays` then finds the day.
  const most = Math.max(...room.map(({ pickT }) => pickT ?? Infinity));
  const mostPressed = Math.max(...room.map(({ pickT, pressT }) => Math.min(pickT ?? Infinity, pressT ?? Infinity)));
  return {
    together: asked.together,
    targets: asked.targets,
    litresPerT: Object.fromEntries(wineTypes.map((wine) => [wine, mustPerTonne(wine, factors)])),
    leastChance: asked.leastChance,
    dayTonnes: Number.isFinite(most) ? most : null,
    pressTonnes: Number.isFinite(mostPressed) ? mostPressed : null,
  };
}

/** Only what the thread needs. */
function plain({ id, variety, wineType, tonnes, values }: FreeZone): ChoiceZone {
  return { id, variety, wineType, tonnes, values };
}

/** "Carignan 1", "Carignan 2": the variety, or the first block where none is known, numbered past names in use. */
function lotNames(lots: readonly (readonly FreeZone[])[], taken: readonly string[]): string[] {
  const used = new Set(taken);
  return lots.map((own) => {
    const stem = [...new Set(own.map(({ variety, name }) => variety || name))].join(' + ').slice(0, 70);
    for (let number = 1; ; number++) {
      const name = `${stem} ${number}`;
      if (used.has(name)) continue;
      used.add(name);
      return name;
    }
  });
}
