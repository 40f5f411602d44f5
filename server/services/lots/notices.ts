import type { Transaction } from 'objection';
import { may } from '../../../shared/catalog/permissions.ts';
import type { Role } from '../../../shared/catalog/roles.ts';
import type { LotView } from '../../../shared/contracts/lots.ts';
import type { NewNotice, NoticeBody, NoticeState, NoticeView } from '../../../shared/contracts/notices.ts';
import type { Access } from '../../access/access.ts';
import { Missing, Unusable } from '../../errors.ts';
import { noticeSheet } from '../../exporters/noticeSheet.ts';
import { fileName } from '../../exporters/fileName.ts';
import { queueMail } from '../../mail/outbox.ts';
import { endOfEstateDay, estateDay } from '../../ground/estateDay.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { Lot } from '../../models/Lot.ts';
import { Membership } from '../../models/Membership.ts';
import { NoticeReader } from '../../models/NoticeReader.ts';
import { Person } from '../../models/Person.ts';
import { PickNotice } from '../../models/PickNotice.ts';
import { Scenario } from '../../models/Scenario.ts';
import { lotsBoard } from './board.ts';
import { lockLot } from './changeLots.ts';
import { keepDecision, shownOf } from './decisions.ts';
import { requireNoPickStop } from './pickStops.ts';
import { dateWords, differencesBetween, fill, noticeText, sheetWords, withoutTonnes, withoutTonnesDifferences } from './noticeWords.ts';
import { say } from '../../sentences/say.ts';

interface Recipient {
  person: Person;
  seesLots: boolean;
}

/** Sends the notice of a confirmed lot: it gets the next number, and the one before it of the same lot is void from then on. */
export async function sendNotice(access: Access, lotId: string, input: NewNotice, options: { publicUrl: string; now: Date }): Promise<{ id: string; number: number }> {
  const { estateId } = access;
  const lot = await Lot.query().findOne({ estateId, id: lotId }).throwIfNotFound();
  const scenario = await Scenario.query().findOne({ estateId, id: lot.scenarioId }).throwIfNotFound();
  if (!scenario.isLive) throw new Unusable('whatIf', say('noticeOfWhatIf'));
  if (lot.state === 'draft' || lot.pickOn === null) throw new Unusable('notConfirmed', say('notConfirmed', { lot: lot.name }));
  const board = await lotsBoard(access, { scenarioId: scenario.id, today: await estateDay(estateId, options.now) });
  const body = bodyOf(
    board.lots.find((one) => one.id === lotId)!,
    {
      input,
      pickOn: lot.pickOn,
      labels: new Map(board.zones.flatMap((zone) => zone.rows.map((row) => [row.id, row.label]))),
      tank: board.tanks.find((tank) => tank.id === lot.tankId)?.name ?? null,
    },
  );
  const recipients = await recipientsOf(estateId, input.people);
  return PickNotice.transaction(async (trx) => {
    // Numbers run without a gap or a double: one notice at a time in an estate.
    const estate = await Estate.query(trx).findById(estateId).forNoKeyUpdate().throwIfNotFound();
    // As it was read above: a lot that somebody opened or dated anew meanwhile is not announced.
    await lockLot(trx, access, lotId, lot.version);
    await requireNoPickStop(trx, access, { lotId, pickOn: body.pickOn });
    const before = await PickNotice.query(trx).where({ estateId, lotId }).orderBy('number', 'desc').first();
    const newest = await PickNotice.query(trx).where({ estateId }).max('number as number').first();
    if (before?.voidAt === null) await before.$query(trx).patch({ voidAt: options.now });
    const notice = await PickNotice.query(trx).insert({ estateId, lotId, number: (newest?.number ?? 0) + 1, replacesNumber: before?.number ?? null, body, sentBy: access.personId, sentAt: options.now });
    await keepDecision(trx, access, { lotId, kind: 'notice', shown: shownOf(board, lotId), now: options.now });
    await NoticeReader.query(trx).insert(recipients.map(({ person }) => ({ noticeId: notice.id, personId: person.id })));
    await mailNotice(trx, { access, estateName: estate.name, notice, body, before: before ? (before.body as NoticeBody) : null, recipients, publicUrl: options.publicUrl });
    await writeAudit(trx, access, { action: 'notices.send', subjectType: 'notice', subjectId: notice.id, subjectName: `${lot.name} ${notice.number}`, after: { number: notice.number, replaces: before?.number ?? null, people: input.people.length } });
    return { id: notice.id, number: notice.number };
  });
}

function bodyOf(lot: LotView, facts: { input: NewNotice; pickOn: string; labels: Map<string, string>; tank: string | null }): NoticeBody {
  return {
    lotName: lot.name,
    pickOn: facts.pickOn,
    fromTime: facts.input.fromTime,
    zones: lot.lines.map((line) => ({ blockName: line.blockName, number: line.number, name: line.name, rows: line.rowIds === null ? null : line.rowIds.map((id) => facts.labels.get(id) ?? '?') })),
    tonnes: lot.summary.tonnes,
    tank: facts.tank,
    note: facts.input.note,
  };
}

/** People with an open place in the estate, with their roles; the choice of who must know is made from these. */
export async function noticePeople(access: Access): Promise<{ id: string; name: string; roles: Role[] }[]> {
  const rows = await openPlaces(access.estateId);
  const people = await Person.query().findByIds([...new Set(rows.map((row) => row.personId))]).orderBy('name').select('id', 'name');
  return people.map(({ id, name }) => ({ id, name, roles: rows.filter((row) => row.personId === id).map((row) => row.role) })).filter(({ roles }) => may(roles, 'notices.acknowledge'));
}

async function openPlaces(estateId: string): Promise<{ personId: string; role: Role }[]> {
  return Membership.query().where({ estateId }).whereNull('endedAt').whereRaw('starts_on <= current_date and (ends_on is null or ends_on >= current_date)').select('personId', 'role');
}

async function recipientsOf(estateId: string, ids: string[]): Promise<Recipient[]> {
  const rows = await openPlaces(estateId);
  const people = await Person.query().findByIds([...new Set(ids)]).select('id', 'name', 'email', 'language');
  return [...new Set(ids)].map((id) => {
    const roles = rows.filter((row) => row.personId === id).map((row) => row.role);
    const person = people.find((one) => one.id === id);
    if (!person || !may(roles, 'notices.acknowledge')) throw new Unusable('notAReader', person && roles.length > 0 ? say('notAReader', { name: person.name }) : say('notAReaderHere'));
    return { person, seesLots: may(roles, 'lots.see', 'read') };
  });
}

interface Mailing {
  access: Access;
  estateName: string;
  notice: PickNotice;
  body: NoticeBody;
  before: NoticeBody | null;
  recipients: Recipient[];
  publicUrl: string;
}

async function mailNotice(trx: Transaction, { access, estateName, notice, body, before, recipients, publicUrl }: Mailing): Promise<void> {
  const differences = before ? differencesBetween(before, body) : [];
  for (const { person, seesLots } of recipients) {
    if (person.email === null) continue;
    const text = noticeText(seesLots ? body : withoutTonnes(body), { language: person.language, replacesNumber: notice.replacesNumber, differences: seesLots ? differences : withoutTonnesDifferences(differences) });
    await queueMail(trx, {
      estateId: access.estateId, kind: 'pickNotice', to: { address: person.email, name: person.name, language: person.language },
      facts: { estate: estateName, number: notice.number, body: text, link: `${publicUrl}/e/${access.estateId}/pick-board?notice=${notice.number}` },
    });
  }
}

/**
 * Notices, newest first; with `knownOn` as they stood at the end of that day. Who may not see lots gets those addressed
 * to them, without tonnes and tank.
 */
export async function listNotices(access: Access, { today, knownOn }: { today: string; knownOn: string | null }): Promise<NoticeView[]> {
  const { estateId, personId } = access;
  const seesLots = may(access.roles, 'lots.see', 'read');
  const until = knownOn === null ? null : await endOfEstateDay(estateId, knownOn);
  const by = (at: Date | null) => (at !== null && (until === null || at <= until) ? at : null);
  const all = (await PickNotice.query().where({ estateId }).orderBy('number', 'desc')).filter(({ sentAt }) => by(sentAt) !== null);
  const readers = await NoticeReader.query().whereIn('noticeId', all.map((notice) => notice.id));
  const people = await Person.query().findByIds([...new Set([...readers.map((reader) => reader.personId), ...all.map((notice) => notice.sentBy)])]).select('id', 'name');
  const nameOf = (id: string) => people.find((person) => person.id === id)?.name ?? '';
  const own = (notice: PickNotice) => readers.filter((reader) => reader.noticeId === notice.id);
  return all
    .filter((notice) => seesLots || own(notice).some((reader) => reader.personId === personId))
    .map((notice) => {
      const body = notice.body as NoticeBody;
      const before = all.find((other) => other.number === notice.replacesNumber);
      const differences = before ? differencesBetween(before.body as NoticeBody, body) : [];
      const voidAt = by(notice.voidAt);
      return {
        id: notice.id,
        number: notice.number,
        lotId: notice.lotId,
        replacesNumber: notice.replacesNumber,
        voidAt: voidAt?.toISOString() ?? null,
        isOver: voidAt === null && body.pickOn < (knownOn ?? today),
        replacedBy: all.find((other) => other.replacesNumber === notice.number)?.number ?? null,
        body: seesLots ? body : withoutTonnes(body),
        differences: seesLots ? differences : withoutTonnesDifferences(differences),
        sentBy: nameOf(notice.sentBy),
        sentAt: notice.sentAt.toISOString(),
        readers: own(notice).map((reader) => ({
          personId: reader.personId,
          name: nameOf(reader.personId),
          readAt: by(reader.readAt)?.toISOString() ?? null,
        })),
        mine: own(notice).some((reader) => reader.personId === personId),
      };
    });
}

/** A notice on paper in the language of whoever prints it; one that was replaced says so, and its code does too. */
export async function printNotice(access: Access, noticeId: string, options: { publicUrl: string; now: Date }): Promise<{ name: string; body: Buffer }> {
  const notice = await PickNotice.query().findOne({ estateId: access.estateId, id: noticeId }).throwIfNotFound();
  const seesLots = may(access.roles, 'lots.see', 'read');
  const isReader = (await NoticeReader.query().where({ noticeId, personId: access.personId }).resultSize()) > 0;
  if (!seesLots && !isReader) throw new Missing(say('noticeOfOthers'));
  const [person, estate] = await Promise.all([Person.query().findById(access.personId).throwIfNotFound(), Estate.query().findById(access.estateId).throwIfNotFound()]);
  const replacedBy = await replacementOf(notice);
  const body = notice.body as NoticeBody;
  const texts = sheetWords(person.language);
  const before = notice.replacesNumber === null ? null : await PickNotice.query().findOne({ estateId: access.estateId, number: notice.replacesNumber });
  const differences = before ? differencesBetween(before.body as NoticeBody, body) : [];
  const text = noticeText(seesLots ? body : withoutTonnes(body), { language: person.language, replacesNumber: notice.replacesNumber, differences: seesLots ? differences : withoutTonnesDifferences(differences) });
  const title = fill(texts.title, { number: notice.number });
  return {
    name: fileName([title], 'pdf'),
    body: await noticeSheet({
      title,
      estateName: estate.name,
      text,
      link: `${options.publicUrl}/n/${notice.code}`,
      scan: texts.scan,
      voidWords: stateWords(notice, { replacedBy, texts, language: person.language, day: dayIn(estate.timeZone, options.now) }),
      now: options.now,
    }),
  };
}

/** Words across a paper whose number no longer holds, or whose day is over; null while it holds. */
function stateWords({ voidAt, body }: PickNotice, how: { replacedBy: number | null; texts: ReturnType<typeof sheetWords>; language: string; day: string }): string | null {
  const { replacedBy, texts, language, day } = how;
  const { pickOn } = body as NoticeBody;
  if (voidAt === null) return pickOn < day ? fill(texts.over, { date: dateWords(language, pickOn) }) : null;
  return replacedBy === null ? texts.voidAlone : fill(texts.void, { number: replacedBy });
}

/** What the code on a printed notice leads to, for anybody who holds the paper: whether its number still holds, and nothing else. */
export async function noticeState(code: string, now: Date): Promise<NoticeState> {
  const notice = await PickNotice.query().findOne({ code });
  if (!notice) throw new Missing(say('unknownNotice'));
  const estate = await Estate.query().findById(notice.estateId).throwIfNotFound();
  const { pickOn } = notice.body as NoticeBody;
  const isVoid = notice.voidAt !== null;
  return { number: notice.number, estateName: estate.name, isVoid, isOver: !isVoid && pickOn < dayIn(estate.timeZone, now), replacedBy: await replacementOf(notice), pickOn: isVoid ? null : pickOn };
}

/** Number of the notice in force for the same lot, followed through all replacements; null while this one holds. */
async function replacementOf(notice: PickNotice): Promise<number | null> {
  if (notice.voidAt === null) return null;
  if (notice.lotId === null) return null;
  const inForce = await PickNotice.query().findOne({ estateId: notice.estateId, lotId: notice.lotId }).whereNull('voidAt');
  return inForce?.number ?? null;
}

/** Notes that the person has read a notice addressed to them; repeating it keeps the first time. */
export async function readNotice(access: Access, noticeId: string, now: Date): Promise<void> {
  await PickNotice.transaction(async (trx) => {
    const notice = await PickNotice.query(trx).findOne({ estateId: access.estateId, id: noticeId }).throwIfNotFound();
    const reader = await NoticeReader.query(trx).findOne({ noticeId, personId: access.personId });
    if (!reader) throw new Missing(say('noticeOfOthers'));
    if (reader.readAt !== null) return;
    await NoticeReader.query(trx).where({ noticeId, personId: access.personId }).patch({ readAt: now });
    await writeAudit(trx, access, { action: 'notices.read', subjectType: 'notice', subjectId: noticeId, subjectName: String(notice.number) });
  });
}
