import { randomInt } from 'node:crypto';
import type { Transaction } from 'objection';
import type { FieldRound } from '../../../shared/contracts/rounds.ts';
import { LABEL_CODES, labelCode } from '../../../shared/field/labelCode.ts';
import type { Access } from '../../access/access.ts';
import { Missing, Unusable } from '../../errors.ts';
import { fileName } from '../../exporters/fileName.ts';
import { labelSheet, type LabelPaper, type PrintedLabel } from '../../exporters/labelSheet.ts';
import { labelTexts, type LabelLanguage } from '../../exporters/labelTexts.ts';
import { measureWords } from '../../exporters/measureWords.ts';
import { paperLocale } from '../../exporters/sheetTexts.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Bag } from '../../models/Bag.ts';
import { Label } from '../../models/Label.ts';
import { Person } from '../../models/Person.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Target } from '../../models/Target.ts';
import { fieldRound } from './fieldRound.ts';
import { seesOwnRoundsOnly } from './listRounds.ts';
import { say } from '../../sentences/say.ts';

/** `vine`: a bag for each vine that something of goes to the laboratory; `zone`: one bag for all vines of a zone. */
export type BagsPer = 'vine' | 'zone';

interface Wanted {
  personId: string;
  targetId: string | null;
  zoneId: string | null;
  number: number;
  measureCodes: string[];
  facts: PrintedLabel['facts'];
}

/** The labels of a round in walking order, a person after the other. Printed again they keep their codes; crew print their own. */
export async function printLabels(access: Access, roundId: string, options: { paper: LabelPaper; per: BagsPer; now: Date }): Promise<{ name: string; body: Buffer }> {
  const { estateId } = access;
  const round = await Round.query().findOne({ estateId, id: roundId }).throwIfNotFound();
  const members = await RoundPerson.query().where({ estateId, roundId });
  const ids = members.map(({ personId }) => personId).filter((id) => !seesOwnRoundsOnly(access) || id === access.personId);
  if (ids.length === 0) throw new Missing();
  const people = await Person.query().findByIds([...new Set([...ids, access.personId!])]).select('id', 'name', 'language');
  const language = languageOf(people.find(({ id }) => id === access.personId)?.language);
  const wanted: Wanted[] = [];
  for (const id of ids) wanted.push(...(await wantedOf({ ...access, personId: id }, round, { per: options.per, language, now: options.now, person: people.find((one) => one.id === id)?.name ?? '' })));
  if (wanted.length === 0) throw new Unusable('noBags', say('noBags'));
  const codes = await codesFor(access, round, wanted);
  const { block } = wanted[0]!.facts!;
  const title = `${block} ${round.onDate}`;
  return { name: fileName([block, round.onDate, 'labels'], 'pdf'), body: await labelSheet(wanted.map(({ facts }, i) => ({ code: codes[i]!, facts })), { paper: options.paper, language, title }) };
}

/** A roll of blank labels: each is bound to a vine or zone when its bag is closed. */
export async function printBlankLabels(access: Access, options: { count: number; paper: LabelPaper }): Promise<{ name: string; body: Buffer }> {
  const person = await Person.query().findById(access.personId!).select('language');
  const codes = await Label.transaction(async (trx) => {
    const fresh = await freshCodes(trx, access.estateId, options.count);
    await Label.query(trx).insert(fresh.map((code) => ({ estateId: access.estateId, code, printedBy: access.personId })));
    await writeAudit(trx, access, { action: 'labels.print', subjectType: 'estate', subjectId: access.estateId, after: { blank: options.count } });
    return fresh;
  });
  return { name: fileName(['labels'], 'pdf'), body: await labelSheet(codes.map((code) => ({ code, facts: null })), { paper: options.paper, language: languageOf(person?.language), title: 'Labels' }) };
}

function languageOf(language: string | undefined): LabelLanguage {
  return language !== undefined && language in labelTexts ? (language as LabelLanguage) : 'en';
}

async function wantedOf(access: Access, { id, onDate }: Round, how: { per: BagsPer; language: LabelLanguage; now: Date; person: string }): Promise<Wanted[]> {
  const field = await fieldRound(access, id, how.now);
  const zoneIds = new Map((await Target.query().where({ estateId: access.estateId, planId: field.planId }).select('id', 'zoneId')).map((target) => [target.id, target.zoneId]));
  const date = new Intl.DateTimeFormat(paperLocale(how.language), { timeZone: 'UTC', day: 'numeric', month: 'short', year: 'numeric' }).format(new Date(`${onDate}T12:00:00Z`));
  const laboratory = new Set(field.measures.filter(({ measuredIn }) => measuredIn === 'lab').map(({ code }) => code));
  const stops = field.stops.map((stop) => ({ ...stop, measures: stop.measures.filter((code) => laboratory.has(code)) })).filter(({ measures }) => measures.length > 0);
  const seen = new Set<number>();
  return stops.flatMap((stop): Wanted[] => {
    if (how.per === 'zone' && seen.has(stop.zone)) return [];
    seen.add(stop.zone);
    const measureCodes = how.per === 'vine' ? stop.measures : [...new Set(stops.filter(({ zone }) => zone === stop.zone).flatMap(({ measures }) => measures))];
    return [
      {
        personId: access.personId!,
        targetId: how.per === 'vine' ? stop.targetId : null,
        zoneId: zoneIds.get(stop.targetId) ?? null,
        number: stop.number,
        measureCodes,
        facts: {
          block: field.blockName,
          date,
          zone: zoneWords(field, stop.zone),
          vine: how.per === 'vine' ? { row: stop.rowLabel, number: stop.vineNumber, place: stop.place } : null,
          stop: stop.number,
          measures: wordsOf(field, measureCodes, how.language),
          person: how.person,
        },
      },
    ];
  });
}

function zoneWords({ zones }: FieldRound, number: number): string {
  const name = zones.find((zone) => zone.number === number)?.name;
  return name && name !== `Zone ${number}` ? `${number}, ${name}` : String(number);
}

function wordsOf({ measures }: FieldRound, codes: readonly string[], language: LabelLanguage): string {
  return codes.map((code) => measureWords[language]?.[code] ?? (measures.find((measure) => measure.code === code)?.name || code)).join(', ');
}

/** Codes of a round's labels: those printed before for the same bag, fresh ones for the rest. */
async function codesFor(access: Access, round: Round, wanted: readonly Wanted[]): Promise<string[]> {
  const { estateId } = access;
  return Label.transaction(async (trx) => {
    await Round.query(trx).findOne({ estateId, id: round.id }).forUpdate().throwIfNotFound();
    const before = new Map((await Label.query(trx).where({ estateId, roundId: round.id })).map((label) => [keyOf(label), label.code]));
    const missing = wanted.filter((one) => !before.has(keyOf(one)));
    const fresh = await freshCodes(trx, estateId, missing.length);
    if (missing.length > 0) await Label.query(trx).insert(missing.map(({ facts: _facts, ...label }, i) => ({ ...label, estateId, roundId: round.id, code: fresh[i]!, printedBy: access.personId })));
    await writeAudit(trx, access, { action: 'labels.print', subjectType: 'round', subjectId: round.id, after: { labels: wanted.length, fresh: missing.length } });
    const made = new Map(missing.map((one, i) => [keyOf(one), fresh[i]!]));
    return wanted.map((one) => before.get(keyOf(one)) ?? made.get(keyOf(one))!);
  });
}

const keyOf = ({ personId, targetId, zoneId }: Pick<Label, 'personId' | 'targetId' | 'zoneId'>) => (targetId === null ? `${personId} ${zoneId}` : targetId);

/** Codes by lot, so that neighbours on a roll look different and one code says nothing of the next. */
async function freshCodes(trx: Transaction, estateId: string, count: number): Promise<string[]> {
  const codes = new Set<string>();
  while (codes.size < count) {
    const tries = Array.from({ length: count - codes.size }, () => labelCode(randomInt(LABEL_CODES)));
    const taken = await Promise.all([Label.query(trx).where({ estateId }).whereIn('code', tries).select('code'), Bag.query(trx).where({ estateId }).whereIn('code', tries).select('code')]);
    const known = new Set(taken.flat().map(({ code }) => code));
    for (const code of tries) if (!known.has(code)) codes.add(code);
  }
  return [...codes];
}
