import type { Transaction } from 'objection';
import type { DecisionView, LotsBoard } from '../../../shared/contracts/lots.ts';
import type { Access } from '../../access/access.ts';
import { estateDay } from '../../ground/estateDay.ts';
import { Lot } from '../../models/Lot.ts';
import { LotDecision } from '../../models/LotDecision.ts';
import { Person } from '../../models/Person.ts';
import { lotsBoard } from './board.ts';

type Shown = DecisionView['shown'];

/** What the board shows of a lot now: the lot, its zones and its tank. */
export async function boardOfLot(access: Access, lotId: string, now: Date): Promise<Shown> {
  const { scenarioId } = await Lot.query().findOne({ estateId: access.estateId, id: lotId }).throwIfNotFound();
  return shownOf(await lotsBoard(access, { scenarioId, today: await estateDay(access.estateId, now) }), lotId);
}

export function shownOf(board: LotsBoard, lotId: string): Shown {
  const lot = board.lots.find(({ id }) => id === lotId)!;
  return { lot, zones: board.zones.filter(({ zoneId }) => lot.lines.some((line) => line.zoneId === zoneId)), tank: board.tanks.find(({ id }) => id === lot.tankId) ?? null, confidence: board.confidence };
}

/** Keeps what was on the screen when a lot was decided on, in the transaction of the decision. */
export async function keepDecision(trx: Transaction, access: Access, facts: { lotId: string; kind: 'confirm' | 'notice'; shown: Shown; now: Date }): Promise<void> {
  await LotDecision.query(trx).insert({ estateId: access.estateId, lotId: facts.lotId, kind: facts.kind, body: facts.shown, decidedBy: access.personId, decidedAt: facts.now });
}

/** Decisions on a lot, newest first, each exactly as the screen showed it. */
export async function listDecisions(access: Access, lotId: string): Promise<DecisionView[]> {
  await Lot.query().findOne({ estateId: access.estateId, id: lotId }).throwIfNotFound();
  const rows = await LotDecision.query().where({ estateId: access.estateId, lotId }).orderBy('decidedAt', 'desc');
  const people = await Person.query().findByIds([...new Set(rows.map(({ decidedBy }) => decidedBy))]).select('id', 'name');
  return rows.map(({ id, kind, body, decidedBy, decidedAt }) => ({ id, kind, decidedBy: people.find((person) => person.id === decidedBy)?.name ?? '', decidedAt: decidedAt.toISOString(), shown: body as Shown }));
}
