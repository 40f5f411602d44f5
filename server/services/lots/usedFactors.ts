import { learnFactor, LOTS_NEEDED, type LearnedFactor } from '../../../shared/cellar/learnFactor.ts';
import type { FactorKind } from '../../../shared/contracts/factors.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { CellarResult } from '../../models/CellarResult.ts';
import { FactorSwitch } from '../../models/FactorSwitch.ts';
import { ScaleTicket } from '../../models/ScaleTicket.ts';
import { Scenario } from '../../models/Scenario.ts';
import { isBearing } from '../../ground/blockVines.ts';
import { loadBoardGround, type BoardBlock, type BoardGround, type Then } from './boardGround.ts';
import { countingTickets } from './countingTickets.ts';
import { assumedLosses, boardConfidence, noFactors, type UsedFactors } from './zoneOutlook.ts';

/** What one lot says of a factor. */
export interface FactorCase {
  kind: FactorKind;
  about: string;
  lotName: string;
  seasonName: string;
  value: number;
}

/** The factors that are switched on (at a moment: that were), learned from every season's lots. Nothing is loaded while none is on. */
export async function usedFactors(estateId: string, then: Then | null = null): Promise<UsedFactors> {
  const switches = then ? then.stood.switches.filter(({ isOn }) => isOn) : await FactorSwitch.query().where({ estateId, isOn: true });
  if (switches.length === 0) return noFactors;
  const learned = learnedOf(await factorCases(estateId, then?.until ?? null));
  const on = (kind: FactorKind) => new Map([...learned].flatMap(([key, factor]) => (factor.n >= LOTS_NEEDED && switches.some((one) => one.kind === kind && key === keyOf(kind, one.about)) ? [[key.slice(kind.length + 1), factor] as const] : [])));
  return { growth: on('growth'), losses: on('losses'), mustL: on('mustL'), wineL: on('wineL'), tankOffset: on('tankOffset') };
}

export const keyOf = (kind: FactorKind, about: string): string => `${kind}|${about}`;

export function learnedOf(cases: readonly FactorCase[]): Map<string, LearnedFactor> {
  return new Map([...groupBy(cases, (one) => keyOf(one.kind, one.about))].map(([key, group]) => [key, learnFactor(group.map(({ value }) => value), boardConfidence)!]));
}

/** Every lot in force of every season, with what it says of each factor; `until`: by what had been entered then. */
export async function factorCases(estateId: string, until: Date | null = null): Promise<FactorCase[]> {
  const results = (await CellarResult.query().where({ estateId }).orderBy('enteredAt')).filter(({ enteredAt }) => until === null || enteredAt <= until);
  const tickets = (await ScaleTicket.query().where({ estateId })).filter(({ enteredAt }) => until === null || enteredAt <= until);
  if (results.length === 0 && tickets.length === 0) return [];
  const newest = new Map(results.map((result) => [result.lotId, result]));
  const scenarios = await Scenario.query().where({ estateId, isLive: true });
  const counting = countingTickets(tickets);
  const grounds = await Promise.all(scenarios.map((scenario) => loadBoardGround(estateId, scenario, noFactors)));
  return grounds.flatMap((ground) =>
    ground.lots.flatMap((lot, index) => {
      const netT = counting.filter(({ lotId }) => lotId === lot.id).reduce((sum, { netKg }) => sum + netKg, 0) / 1000;
      const about = { lotName: lot.name, seasonName: ground.season.name };
      return casesOf({ ground, index, wineType: lot.wineType, netT, result: newest.get(lot.id) ?? null }).map((one) => ({ ...one, ...about }));
    }),
  );
}

function casesOf(facts: { ground: BoardGround; index: number; wineType: string; netT: number; result: CellarResult | null }): Pick<FactorCase, 'kind' | 'about' | 'value'>[] {
  const { ground, index, wineType, netT, result } = facts;
  const shares = ground.blocks.flatMap((block) => sharesIn(block, index));
  const varieties = [...new Set(shares.map(({ block }) => block.ground.block.variety))];
  const variety = varieties.length === 1 && varieties[0] !== '' ? varieties[0]! : null;
  const found: Pick<FactorCase, 'kind' | 'about' | 'value'>[] = [];
  const leftT = result?.leftOutKg == null ? null : result.leftOutKg / 1000;
  if (netT > 0 && result?.mustL != null) found.push({ kind: 'mustL', about: wineType, value: result.mustL / netT });
  if (netT > 0 && result?.wineL != null) found.push({ kind: 'wineL', about: wineType, value: result.wineL / netT });
  if (variety === null) return found;
  if (netT > 0 && leftT !== null) found.push({ kind: 'losses', about: variety, value: leftT / (leftT + netT) });
  const counted = shares.reduce((sum, { block, at, share }) => sum + share * countedT(block, at), 0);
  const isLag = shares.length > 0 && shares.every(({ block, at }) => block.outlooks[at]!.beforeVeraison);
  if (netT > 0 && isLag && counted > 0) found.push({ kind: 'growth', about: variety, value: (leftT === null ? netT / (1 - assumedLosses.share) : netT + leftT) / counted });
  const brix = sampledBrix(shares);
  if (result?.tankBrix != null && brix !== null) found.push({ kind: 'tankOffset', about: variety, value: brix - result.tankBrix });
  return found;
}

interface ShareIn {
  block: BoardBlock;
  at: number;
  share: number;
}

function sharesIn(block: BoardBlock, lot: number): ShareIn[] {
  return block.zones.flatMap((zone, at) => {
    const bearing = [...block.zoneOf.keys()].filter((vine) => block.zoneOf[vine] === zone.number && block.lotOf[vine] === lot && isBearing(block.ground.states[vine]!)).length;
    return bearing === 0 ? [] : [{ block, at, share: bearing / block.outlooks[at]!.bearing }];
  });
}

/** Tonnes as weighed when counted: living vines × clusters × weight, without growth and losses. */
function countedT(block: BoardBlock, at: number): number {
  const { yield: expected, parts } = block.outlooks[at]!;
  const value = (part: string) => parts.find((one) => one.part === part)!.value;
  return expected.tonnes / (value('growth') * (1 - value('losses')));
}

function sampledBrix(shares: readonly ShareIn[]): number | null {
  let [sum, weight] = [0, 0];
  for (const { block, at, share } of shares) {
    const outlook = block.outlooks[at]!;
    if (outlook.latest.brix === null) return null;
    sum += outlook.latest.brix.mean * share * outlook.tonnes.value;
    weight += share * outlook.tonnes.value;
  }
  return weight > 0 ? sum / weight : null;
}
