import type { z } from 'zod';
import type { CellarResultView, FactorKind, FactorView, factorSwitch, newCellarResult } from '../../../shared/contracts/factors.ts';
import { LOTS_NEEDED } from '../../../shared/cellar/learnFactor.ts';
import { hintFor } from '../../../shared/cellar/tankFit.ts';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { CellarResult } from '../../models/CellarResult.ts';
import { FactorSwitch } from '../../models/FactorSwitch.ts';
import { Lot } from '../../models/Lot.ts';
import { Person } from '../../models/Person.ts';
import { factorCases, keyOf, learnedOf } from './usedFactors.ts';
import { assumedGrowth, assumedLosses } from './zoneOutlook.ts';
import { say } from '../../sentences/say.ts';

/** Keeps what the cellar measured of a lot. The entry before stays in the table and no longer counts. */
export async function enterCellarResult(access: Access, lotId: string, input: z.infer<typeof newCellarResult>, now: Date): Promise<{ id: string }> {
  return CellarResult.transaction(async (trx) => {
    const lot = await Lot.query(trx).findOne({ estateId: access.estateId, id: lotId }).throwIfNotFound();
    const row = await CellarResult.query(trx).insert({ ...input, estateId: access.estateId, lotId, enteredBy: access.personId, enteredAt: now });
    await writeAudit(trx, access, { action: 'cellar.enter', subjectType: 'lot', subjectId: lotId, subjectName: lot.name, after: input });
    return { id: row.id };
  });
}

/** The newest entry of each lot. */
export async function listCellarResults(access: Access): Promise<CellarResultView[]> {
  const rows = await CellarResult.query().where({ estateId: access.estateId }).orderBy('enteredAt', 'desc');
  const people = await Person.query().findByIds([...new Set(rows.map(({ enteredBy }) => enteredBy))]).select('id', 'name');
  return rows
    .filter((row, index) => rows.findIndex(({ lotId }) => lotId === row.lotId) === index)
    .map(({ lotId, mustL, wineL, tankBrix, leftOutKg, note, enteredBy, enteredAt }) => ({ lotId, mustL, wineL, tankBrix, leftOutKg, note, enteredBy: people.find(({ id }) => id === enteredBy)?.name ?? '', enteredAt: enteredAt.toISOString() }));
}

/** Every factor that the estate's lots say something of, with the lots behind it. Off until somebody switches it on. */
export async function listFactors(access: Access): Promise<FactorView[]> {
  const [cases, switches] = await Promise.all([factorCases(access.estateId), FactorSwitch.query().where({ estateId: access.estateId })]);
  return [...learnedOf(cases)].map(([key, { n, mean, sd, low, high, few }]) => {
    const own = cases.filter((one) => keyOf(one.kind, one.about) === key);
    const { kind, about } = own[0]!;
    const told = (value: number) => (Number.isNaN(value) ? null : value);
    return {
      kind, about, n, mean, sd: told(sd), low: told(low), high: told(high), few,
      isOn: switches.some((one) => one.kind === kind && one.about === about && one.isOn),
      assumed: assumedOf(kind, about),
      lots: own.map(({ lotName, seasonName, value }) => ({ lotName, seasonName, value })),
    };
  });
}

function assumedOf(kind: FactorKind, about: string): number | null {
  if (kind === 'growth') return assumedGrowth;
  if (kind === 'losses') return assumedLosses.share;
  if (kind === 'tankOffset') return null;
  const hint = hintFor(about, kind === 'wineL' ? 'wine' : 'must');
  return (hint.lowLPerT + hint.highLPerT) / 2;
}

export async function switchFactor(access: Access, input: z.infer<typeof factorSwitch>, now: Date): Promise<void> {
  const found = (await listFactors(access)).find(({ kind, about }) => kind === input.kind && about === input.about);
  if (input.isOn && (found === undefined || found.n < LOTS_NEEDED)) throw new Unusable('fewLots', say('fewLots', { n: found?.n ?? 0, least: LOTS_NEEDED }));
  await FactorSwitch.transaction(async (trx) => {
    await FactorSwitch.query(trx).insert({ estateId: access.estateId, kind: input.kind, about: input.about, isOn: input.isOn, setBy: access.personId, setAt: now }).onConflict(['estateId', 'kind', 'about']).merge(['isOn', 'setBy', 'setAt']);
    await writeAudit(trx, access, {
      action: 'factors.switch',
      subjectType: 'factor',
      subjectId: access.estateId,
      subjectName: `${input.kind} ${input.about}`,
      before: { isOn: found?.isOn ?? false },
      after: { isOn: input.isOn, n: found?.n ?? 0, mean: found?.mean ?? null },
    });
  });
}
