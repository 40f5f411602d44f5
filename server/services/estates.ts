import type { z } from 'zod';
import { may } from '../../shared/catalog/permissions.ts';
import { estateSettings, type BackupView, type EstateFactsView, type NewEstate, type SeasonChange, type estateChange } from '../../shared/contracts/estate.ts';
import { measures } from '../../shared/catalog/measures.ts';
import { phaseProblem, startingPhases } from '../../shared/season/phases.ts';
import { seasonAround } from '../../shared/season/seasonAround.ts';
import type { Access } from '../access/access.ts';
import { Clash, NotAllowed, Unusable } from '../errors.ts';
import { estateDay } from '../ground/estateDay.ts';
import { writeAudit } from '../models/AuditEntry.ts';
import { BackupRecord } from '../models/BackupRecord.ts';
import { Estate } from '../models/Estate.ts';
import { asGeoJson, fromGeoJson } from '../models/geometry.ts';
import { MeasureRecord } from '../models/MeasureRecord.ts';
import { Membership } from '../models/Membership.ts';
import { Scenario } from '../models/Scenario.ts';
import { Season } from '../models/Season.ts';
import { say } from '../sentences/say.ts';

/** Makes an estate with its owner, its first season, the starting measures and the live set of lots. Returns its id. */
export async function createEstate(personId: string, input: NewEstate, today: string): Promise<string> {
  return Estate.transaction(async (trx) => {
    const { marker, ...facts } = input;
    const estate = await Estate.query(trx).insert({ ...facts, settings: estateSettings.parse({}), ...(marker ? { marker: fromGeoJson(marker) as never } : {}) });
    await Membership.query(trx).insert({ estateId: estate.id, personId, role: 'owner' });
    const span = seasonAround(today, input.seasonStartMonth);
    const season = await Season.query(trx).insert({ estateId: estate.id, ...span, phases: startingPhases(span.startsOn) });
    await Scenario.query(trx).insert({ estateId: estate.id, seasonId: season.id, name: season.name, isLive: true, createdBy: personId });
    await MeasureRecord.query(trx).insert(startingMeasures(estate.id));
    await writeAudit(trx, { estateId: estate.id, personId }, { action: 'estate.create', subjectType: 'estate', subjectId: estate.id, subjectName: input.name });
    return estate.id;
  });
}

/** The same for somebody who is signed in: whoever owns an estate here. The first of an installation is made where the server runs. */
export async function createAnother(personId: string, input: NewEstate, today: string): Promise<string> {
  const open = await Membership.query().where({ personId }).whereNull('endedAt').whereRaw('starts_on <= current_date and (ends_on is null or ends_on >= current_date)').select('role');
  if (!may(open.map(({ role }) => role), 'estate.create')) throw new NotAllowed(say('ownersMakeEstates'));
  return createEstate(personId, input, today);
}

/** The calendar day that it is at the estate. */
export const todayOf = (access: Access, now: Date): Promise<string> => estateDay(access.estateId, now);

/** Rows of the catalogue as an estate's own measures, to be changed from there. */
export function startingMeasures(estateId: string) {
  return measures.map((measure) => ({
    estateId,
    code: measure.code,
    unit: measure.unit,
    decimals: measure.decimals,
    minimum: measure.min,
    maximum: measure.max,
    marginKind: measure.marginKind,
    margin: measure.margin,
    sampledUnit: measure.sampledUnit,
    spreadKind: measure.defaultSpread.kind,
    spreadValue: measure.defaultSpread.value,
    spreadSource: measure.defaultSpread.source,
    typicalMean: measure.typicalMean,
    secondsPerSample: measure.secondsPerSample,
    weighting: measure.weighting,
    skewed: measure.skewed,
    measuredIn: measure.where,
  }));
}

/** What the estate says of itself and has set; who may restore is told of backups as well. */
export async function readEstateFacts(access: Access): Promise<EstateFactsView> {
  const estate = (await Estate.query().findById(access.estateId).select('estates.*', asGeoJson('marker').as('marker')).throwIfNotFound()) as Estate & { marker: NewEstate['marker'] };
  const { name, country, timeZone, units, languages, seasonStartMonth, marker } = estate;
  return {
    facts: { name, country, timeZone, units, languages: languages as NewEstate['languages'], seasonStartMonth, marker },
    settings: estateSettings.parse(estate.settings),
    backup: may(access.roles, 'estate.backup') ? await readBackups() : null,
  };
}

async function readBackups(): Promise<BackupView> {
  const [last, drill] = await Promise.all([
    BackupRecord.query().where({ kind: 'backup', ok: true }).orderBy('archivedAt', 'desc').first(),
    BackupRecord.query().where({ kind: 'drill' }).orderBy('at', 'desc').first(),
  ]);
  return { lastAt: last?.archivedAt.toISOString() ?? null, rows: last?.rowTotal ?? 0, files: last?.fileTotal ?? 0, drillAt: drill?.at.toISOString() ?? null, drillOk: drill?.ok ?? null };
}

export async function changeEstate(access: Access, change: z.infer<typeof estateChange>): Promise<void> {
  await Estate.transaction(async (trx) => {
    const before = await Estate.query(trx).findById(access.estateId).throwIfNotFound();
    const { marker, settings, ...facts } = change;
    const merged = settings ? estateSettings.parse({ ...before.settings, ...settings }) : undefined;
    await Estate.query(trx)
      .findById(access.estateId)
      .patch({ ...facts, ...(merged ? { settings: merged } : {}), ...(marker ? { marker: fromGeoJson(marker) as never } : {}) });
    await writeAudit(trx, access, { action: 'estate.settings', subjectType: 'estate', subjectId: access.estateId, subjectName: before.name, before: { name: before.name, settings: before.settings }, after: change });
  });
}

const phaseSentences = { reversed: 'phaseReversed', outside: 'phaseOutside', overlaps: 'phaseOverlaps' } as const;

/** Moves the phases of a season that is still open. */
export async function changeSeason(access: Access, seasonId: string, change: SeasonChange): Promise<void> {
  await Season.transaction(async (trx) => {
    const before = await Season.query(trx).findOne({ estateId: access.estateId, id: seasonId }).forUpdate().throwIfNotFound();
    if (before.closedAt) throw new Clash('seasonClosed', say('seasonClosed', { season: before.name }));
    const phases = change.phases as Record<string, [string, string]>;
    const wrong = phaseProblem(phases, before);
    if (wrong) throw new Unusable('phases', say(phaseSentences[wrong.problem], { phase: wrong.phase }));
    await Season.query(trx).where({ estateId: access.estateId, id: seasonId }).patch({ phases });
    await writeAudit(trx, access, { action: 'estate.season', subjectType: 'season', subjectId: seasonId, subjectName: before.name, before: { phases: before.phases }, after: { phases } });
  });
}
