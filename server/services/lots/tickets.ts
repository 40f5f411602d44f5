import type { Transaction } from 'objection';
import type { z } from 'zod';
import { readTickets } from '../../../shared/cellar/ticketTable.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import { kgPerUnit, type MassUnit, type NewTicket, type ticketFile, type TicketReading, type TicketSplit, type TicketView } from '../../../shared/contracts/tickets.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { Estate } from '../../models/Estate.ts';
import { Lot } from '../../models/Lot.ts';
import { Person } from '../../models/Person.ts';
import { Scenario } from '../../models/Scenario.ts';
import { ScaleTicket } from '../../models/ScaleTicket.ts';
import { Season } from '../../models/Season.ts';
import { findScenario } from './board.ts';
import { keepPicked } from './countingTickets.ts';
import { requireFruitDay } from './fruitDay.ts';
import { zonesInLot } from './zonesInLot.ts';
import { say } from '../../sentences/say.ts';

/** Kilograms by which a split may miss the net weight: rounding of bins. */
const splitToleranceKg = 1;

/**
 * Keeps a scale ticket as it was handed over. Tickets are never changed: a correction is a new one that names the one
 * it corrects, and only the newest of such a chain counts. One with a net of 0 takes its load out.
 */
export async function enterTicket(access: Access, input: NewTicket, now: Date): Promise<{ id: string }> {
  const { estateId } = access;
  await requireOfLot(estateId, input);
  return ScaleTicket.transaction(async (trx) => {
    await oneAtATime(trx, estateId);
    const lot = await Lot.query(trx).findOne({ estateId, id: input.lotId }).forUpdate().throwIfNotFound();
    const scenario = await Scenario.query(trx).findOne({ estateId, id: lot.scenarioId }).throwIfNotFound();
    if (!scenario.isLive) throw new Unusable('whatIf', say('ticketOfWhatIf'));
    await requireFruitDay(trx, lot, dayIn((await Estate.query(trx).findById(estateId).throwIfNotFound()).timeZone, new Date(input.weighedAt)));
    const known = await ScaleTicket.query(trx).where({ estateId }).select('id', 'ticketNo', 'corrects', 'lotId');
    const corrected = input.corrects === null ? null : known.find((ticket) => ticket.id === input.corrects);
    if (corrected === undefined) throw new Unusable('noTicket', say('noTicket'));
    if (corrected && known.some((ticket) => ticket.corrects === corrected.id)) throw new Clash('correctedAlready', say('correctedAlready', { ticketNo: corrected.ticketNo }));
    if (!corrected && known.some((ticket) => ticket.ticketNo === input.ticketNo)) throw new Clash('ticketTwice', say('ticketTwice', { ticketNo: input.ticketNo }));
    const factor = kgPerUnit[input.unit];
    requireSplitAddsUp(input.split, (input.gross - input.tare) * factor);
    const ticket = await ScaleTicket.query(trx).insert({
      estateId,
      lotId: lot.id,
      ticketNo: input.ticketNo,
      grossKg: input.gross * factor,
      tareKg: input.tare * factor,
      unitTyped: input.unit,
      weighedAt: new Date(input.weighedAt),
      split: input.split,
      corrects: input.corrects,
      note: input.note,
      enteredBy: access.personId,
      enteredAt: now,
    } as never);
    await keepPicked(trx, access, [lot.id, ...(corrected ? [corrected.lotId] : [])]);
    await writeAudit(trx, access, { action: corrected ? 'tickets.correct' : 'tickets.enter', subjectType: 'ticket', subjectId: ticket.id, subjectName: input.ticketNo, after: input, reason: input.note || null });
    return { id: ticket.id };
  });
}

/** Parts of a load name ground that its lot has vines on: any other would count for no zone. Read ahead of the transaction, which then holds one connection only. */
async function requireOfLot(estateId: string, { lotId, split }: NewTicket): Promise<void> {
  if (split.length === 0) return;
  const lot = await Lot.query().findOne({ estateId, id: lotId }).throwIfNotFound();
  const blocks = await Block.query().where({ estateId }).findByIds(split.map((part) => part.blockId)).select('id', 'name');
  const ground = await zonesInLot(lot);
  for (const { blockId, zoneNumber } of split) {
    const block = blocks.find(({ id }) => id === blockId);
    if (block === undefined) throw new Unusable('noBlock', say('noBlock'));
    const own = ground.find((one) => one.blockId === blockId);
    if (own && (zoneNumber === null || own.numbers.includes(zoneNumber))) continue;
    const zones = ground.map(({ blockName, numbers }) => [blockName, numbers.join(', ')].join(' ').trim()).join('; ');
    throw new Unusable('notOfLot', say('notOfLot', { part: [block.name, zoneNumber ?? ''].join(' ').trim(), lot: lot.name, zones: zones || '–' }));
  }
}

/** Reads a weighbridge's table back; enters all of it when asked to and nothing is left to settle. */
export async function importTickets(access: Access, file: z.infer<typeof ticketFile>, options: { today: string; now: Date }): Promise<TicketReading> {
  return ScaleTicket.transaction((trx) => importIn(trx, access, file, options));
}

/** Ticket numbers are known once in an estate: whoever enters tickets waits for whoever is doing so. */
async function oneAtATime(trx: Transaction, estateId: string): Promise<void> {
  await Estate.query(trx).findById(estateId).forNoKeyUpdate();
}

async function importIn(trx: Transaction, access: Access, file: z.infer<typeof ticketFile>, options: { today: string; now: Date }): Promise<TicketReading> {
  const { estateId } = access;
  if (file.apply) await oneAtATime(trx, estateId);
  const scenario = await findScenario(access, { scenarioId: null, today: options.today });
  const lots = await Lot.query(trx).where({ estateId, scenarioId: scenario.id }).select('id', 'name');
  const known = await ScaleTicket.query(trx).where({ estateId }).select('ticketNo');
  const estate = await Estate.query(trx).findById(estateId).throwIfNotFound();
  const season = await Season.query(trx).findOne({ estateId, id: scenario.seasonId }).throwIfNotFound();
  const read = readTickets(file.text, { season, lots: lots.map(({ id, name }) => ({ id, name })), known: known.map(({ ticketNo }) => ticketNo) }, file);
  const view: TicketReading = {
    tickets: read.tickets.map(({ line, ticketNo, lotName, gross, tare, unit, day, netOnly }) => ({ line, ticketNo, lotName, netKg: (gross - tare) * kgPerUnit[unit], day, netOnly })),
    questions: [...read.questions], problems: read.problems.slice(0, shownProblems), kept: 0,
  };
  if (!file.apply) return view;
  if (read.questions.length > 0) throw new Clash('tableQuestions', say('tableQuestions'));
  if (read.problems.length > 0 || read.tickets.length === 0) throw new Unusable('tableProblems', say('tableProblems', { n: read.problems.length }));
  const rows = read.tickets.map(({ lotId, ticketNo, gross, tare, unit, day, time }) => ({
    estateId, lotId, ticketNo, grossKg: gross * kgPerUnit[unit], tareKg: tare * kgPerUnit[unit], unitTyped: unit, split: [], corrects: null, enteredBy: access.personId, enteredAt: options.now,
    note: '',
    weighedAt: ScaleTicket.raw('(?::timestamp at time zone ?)', [`${day} ${time}`, estate.timeZone]),
  }));
  await ScaleTicket.query(trx).insert(rows as never);
  await Lot.query(trx).where({ estateId }).whereIn('id', read.tickets.map(({ lotId }) => lotId)).whereNot({ state: 'picked' }).patch({ state: 'picked', version: Lot.raw('version + 1') as never });
  await writeAudit(trx, access, { action: 'tickets.import', subjectType: 'ticket', subjectId: scenario.id, subjectName: `${read.tickets.length}`, after: { numbers: read.tickets.map(({ ticketNo }) => ticketNo) } });
  return { ...view, kept: read.tickets.length };
}

const shownProblems = 20;

function requireSplitAddsUp(split: readonly TicketSplit[], netKg: number): void {
  if (split.length === 0) return;
  const sum = split.reduce((total, part) => total + part.kg, 0);
  if (Math.abs(sum - netKg) > splitToleranceKg) throw new Unusable('splitSum', say('splitSum', { sum: sum.toFixed(0), netKg: netKg.toFixed(0) }));
}

/** Tickets of the season's lots, newest first, with what corrects what. */
export async function listTickets(access: Access, today: string): Promise<TicketView[]> {
  const { estateId } = access;
  const { seasonId } = await findScenario(access, { scenarioId: null, today });
  const rows = await ScaleTicket.query().where({ estateId }).whereIn('lotId', Lot.query().where({ estateId, seasonId }).select('id')).orderBy('weighedAt', 'desc');
  const [lots, blocks, people] = await Promise.all([
    Lot.query().where({ estateId }).select('id', 'name'),
    Block.query().where({ estateId }).select('id', 'name'),
    Person.query().findByIds([...new Set(rows.map((row) => row.enteredBy))]).select('id', 'name'),
  ]);
  const nameOf = (list: { id: string; name: string }[], id: string) => list.find((one) => one.id === id)?.name ?? '';
  return rows.map((row) => ({
    id: row.id, lotId: row.lotId, lotName: nameOf(lots, row.lotId), ticketNo: row.ticketNo, grossKg: row.grossKg, tareKg: row.tareKg, netKg: row.netKg, unit: row.unitTyped as MassUnit, weighedAt: row.weighedAt.toISOString(),
    split: (row.split as TicketSplit[]).map((part) => ({ ...part, blockName: nameOf(blocks, part.blockId) })),
    corrects: row.corrects, correctedBy: rows.find((other) => other.corrects === row.id)?.id ?? null, note: row.note, enteredBy: nameOf(people, row.enteredBy), enteredAt: row.enteredAt.toISOString(),
  }));
}
