import { estateSettings } from '../../../shared/contracts/estate.ts';
import type { PlanBasis } from '../../../shared/contracts/planBasis.ts';
import type { FieldRound, FieldRow, WalkStop } from '../../../shared/contracts/rounds.ts';
import { rowRuns } from '../../../shared/analysis/snapToRows.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { firstOrdinal } from '../../../shared/geo/vines.ts';
import { headOf } from '../../../shared/sampling/pooledZones.ts';
import type { Access } from '../../access/access.ts';
import { Missing } from '../../errors.ts';
import { loadBlockVines, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { peopleWhoMay } from '../../ground/peopleWhoMay.ts';
import { restrictionViews } from '../../ground/restrictionViews.ts';
import { EntryRestriction } from '../../models/EntryRestriction.ts';
import { Estate } from '../../models/Estate.ts';
import { Person } from '../../models/Person.ts';
import { Plan } from '../../models/Plan.ts';
import { Reading } from '../../models/Reading.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import { Target } from '../../models/Target.ts';
import { Zoning } from '../../models/Zoning.ts';
import { measuresOfPlan, sampledZones } from '../plans/standingOfPlan.ts';
import { vineWords } from '../plans/viewPlan.ts';
import { dayStops } from './dayStops.ts';
import { seesOwnRoundsOnly } from './listRounds.ts';
import type { RoundWalk, StoredStop } from './roundWalk.ts';

/** A day's work complete: what a phone needs from the morning until it meets the server again. */
export async function fieldRound(access: Access, roundId: string, now: Date): Promise<FieldRound> {
  const { estateId, personId } = access;
  const round = await Round.query().findOne({ estateId, id: roundId }).throwIfNotFound();
  const members = await RoundPerson.query().where({ estateId, roundId });
  const me = members.find((member) => member.personId === personId);
  if (!me && seesOwnRoundsOnly(access)) throw new Missing();
  const [estate, plan, ground, targets, people] = await Promise.all([
    Estate.query().findById(estateId).throwIfNotFound(),
    Plan.query().findOne({ estateId, id: round.planId }).throwIfNotFound(),
    loadBlockVines(estateId, round.blockId),
    Target.query().where({ estateId, planId: round.planId }),
    Person.query().findByIds(members.map((member) => member.personId)).select('id', 'name'),
  ]);
  const { basis, sampledZoneOf } = sampledZones(plan);
  const { shares } = round.walk as RoundWalk;
  const stops = (me ? shares.filter((share) => share.personId === personId) : shares).flatMap((share) => share.stops);
  const zoneOfTarget = new Map(targets.map(({ id, zoneId }) => [id, sampledZoneOf.get(zoneId) ?? 0]));
  // What was corrected is told by its correction alone: the phone takes the last value of a vine, as the office does.
  const readings = await Reading.query().where({ estateId, roundId }).whereNull('excludedReason').whereNotExists(Reading.query().alias('later').whereColumn('later.supersedes', 'readings.id').whereColumn('later.estateId', 'readings.estateId')).orderBy('takenAt').select('id', 'targetId', 'measureCode', 'value', 'personId', 'rowId', 'ordinal');
  const { block } = ground;
  const targetOf = new Map(targets.map((target) => [target.id, target]));
  const atReserve = new Set(readings.flatMap(({ targetId, rowId, ordinal }) => (targetId !== null && isReserveOf(targetOf.get(targetId), { rowId, ordinal }) ? [targetId] : [])));
  const stopsOf = (list: StoredStop[]) => list.flatMap((stop) => stopOf(stop, { ground, target: targetOf.get(stop.targetId), zone: zoneOfTarget.get(stop.targetId) ?? 0, atReserve }));
  return {
    id: round.id, planId: plan.id, planName: plan.name, blockId: block.id, blockName: block.name, estateName: estate.name,
    onDate: round.onDate, state: round.state, gate: round.gate, notes: round.notes,
    startPostColour: block.startPostColour, endPostColour: block.endPostColour, vineOneEnd: block.vineOneEnd,
    people: shares.map((share) => ({ id: share.personId, name: people.find(({ id }) => id === share.personId)?.name ?? '', vines: share.stops.length })),
    zones: basis.zones.map(({ number, name, colour, vines }) => ({ number, name, colour, vines, targets: stops.filter(({ targetId }) => zoneOfTarget.get(targetId) === number).length })),
    measures: await measuresOfPlan(estateId, plan),
    rows: await fieldRows(estateId, { ground, plan, basis }),
    stops: stopsOf(stops),
    others: me ? shares.filter((share) => share.personId !== personId).map((share) => ({ id: share.personId, name: people.find(({ id }) => id === share.personId)?.name ?? '', stops: stopsOf(share.stops) })) : [],
    received: readings.filter((reading) => reading.personId === personId).map(({ id, targetId, measureCode, value }) => ({ id, targetId, measureCode, value, zone: targetId === null ? 0 : zoneOfTarget.get(targetId) ?? 0 })),
    doneTargetIds: [...new Set(readings.flatMap(({ targetId }) => (targetId === null ? [] : [targetId])))],
    readAsks: readings.flatMap(({ targetId, measureCode }) => (targetId === null ? [] : [{ targetId, measureCode }])),
    safety: safetyOf(estate),
    restrictions: await restrictionViews(estateId, await EntryRestriction.query().where({ estateId, blockId: block.id }).where('endsAt', '>', now).orderBy('endsAt', 'desc'), now),
    lifters: (await peopleWhoMay(undefined, estateId, 'restrictions.lift')).map(({ name }) => name),
    checkedAt: now.toISOString(),
    day: me ? await dayStops(estateId, { personId, onDate: round.onDate }) : [],
    acknowledgedAt: me?.acknowledgedAt?.toISOString() ?? null,
  };
}

function safetyOf(estate: Estate): FieldRound['safety'] {
  const { emergencyNumber, meetingPoint } = estateSettings.parse(estate.settings);
  return { emergencyNumber, meetingPoint };
}

/** Rows with their zones as the plan samples them: for a crew, zones sampled as one are one. */
async function fieldRows(estateId: string, { ground, plan, basis }: { ground: BlockVines; plan: Plan; basis: PlanBasis }): Promise<FieldRow[]> {
  const zoning = await Zoning.query().findOne({ estateId, id: plan.zoningId }).throwIfNotFound();
  const pools = basis.zones.flatMap(({ members }) => (members ? [members] : []));
  const runs = rowRuns(ground.vines, zonesOfVines(ground, zoning).map((zone) => headOf(pools, zone)));
  return ground.stored.map((row, index) => {
    const [from, to] = [ground.vines.rowStart[index]!, ground.vines.rowStart[index + 1]!];
    const known: FieldRow['known'] = [];
    for (let vine = from; vine < to; vine++) {
      const state = ground.states[vine];
      if (state) known.push({ ordinal: ground.vines.ordinal[vine]!, state });
    }
    return {
      id: row.id, label: row.label, firstOrdinal: firstOrdinal(ground.rows.rows[index]!), vineCount: row.vineCount, known,
      ends: from < to ? [placeOf(ground, from), placeOf(ground, to - 1)] : null,
      runs: runs.filter(({ rowIndex }) => rowIndex === index).map(({ label, fromOrdinal, toOrdinal }) => ({ zone: label, from: fromOrdinal, to: toOrdinal })),
    };
  });
}

/** To a tenth of a metre: a phone is worse, and a day's work stays small. */
function placeOf({ vines, block }: BlockVines, index: number): [number, number] {
  const [lon, lat] = fromUtm([vines.x[index]!, vines.y[index]!], block.epsg);
  return [Number(lon.toFixed(6)), Number(lat.toFixed(6))];
}

/** A stop with the vine's words; a vine whose row has gone since is left out of the walk. */
/** Whether a vine is the reserve of a target; where vines were renumbered since, identities still say so. */
const isReserveOf = (target: Target | undefined, vine: { rowId: string | null; ordinal: number | null }): boolean => target !== undefined && target.reserveRowId !== null && target.reserveRowId === vine.rowId && target.reserveOrdinal === vine.ordinal;

function stopOf(stop: StoredStop, { ground, target, zone, atReserve }: { ground: BlockVines; target: Target | undefined; zone: number; atReserve: ReadonlySet<string> }): WalkStop[] {
  const index = target ? ground.rowIndexOf.get(target.rowId) : undefined;
  if (!target || index === undefined) return [];
  const { targetId, number, enterBy, heading, ahead, aheadFrom, opensZone } = stop;
  return [{
    targetId, number, enterBy, heading, ahead, aheadFrom, opensZone, zone,
    ...vineWords(ground, target.rowId, target.ordinal),
    rowLabelWas: ground.stored[index]!.labelWas,
    drawOrder: target.drawOrder,
    measures: target.measureCodes,
    reserve: target.reserveRowId === null || target.reserveOrdinal === null ? null : vineWords(ground, target.reserveRowId, target.reserveOrdinal),
    ...(atReserve.has(targetId) ? { atReserve: true } : {}),
  }];
}
