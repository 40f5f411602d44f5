import type { Point } from 'geojson';
import { toUtm } from '../../shared/geo/utm.ts';
import { Bag } from '../models/Bag.ts';
import { AuditEntry } from '../models/AuditEntry.ts';
import { EarlierFile } from '../models/EarlierFile.ts';
import { Estate } from '../models/Estate.ts';
import { asGeoJson } from '../models/geometry.ts';
import { Reading } from '../models/Reading.ts';
import { countedValue } from '../../shared/lab/belowDetection.ts';
import { zoneOfBag } from './bagZone.ts';
import { indexOfVine, type BlockVines } from './blockVines.ts';

/** A reading with the zone its vine is in today. */
export interface ZonedReading {
  id: string;
  measureCode: string;
  value: number;
  samples: number;
  /** 0 when the vine is in no zone. */
  zone: number;
  /** Day of the visit in the estate's own time. */
  visit: string;
  /** Day on which it reached the estate's books. */
  receivedOn: string;
  vineKey: string;
  roundId: string | null;
  seasonId: string;
  state: Reading['state'];
  excludedReason: string | null;
  /** Fruit was wet when it was taken. */
  wetFruit: boolean;
  /** Index in the vine table, or -1. */
  vine: number;
}

/**
 * Readings of a block with today's zone of their vines; corrected readings are replaced by their corrections.
 * A reading without row and number is given to the vine nearest to its position, within three metres. A figure of a bag
 * stands for the zone that most of the bag's vines are in; the bag counts as one place, and its figures as repeats.
 */
export async function zonedReadings(estateId: string, options: { ground: BlockVines; zoneOf: Uint8Array; seasonId?: string; until?: Date }): Promise<ZonedReading[]> {
  const { ground, zoneOf } = options;
  const query = Reading.query()
    .where('readings.estateId', estateId)
    .where('readings.blockId', ground.block.id)
    .whereNotExists(correctionsBy(options.until ?? null))
    .orderBy('takenAt')
    .select('readings.*', asGeoJson('readings.position').as('position'));
  if (options.seasonId) query.where('readings.seasonId', options.seasonId);
  if (options.until) query.where('readings.receivedAt', '<=', options.until);
  const [rows, estate, bags] = await Promise.all([query, Estate.query().findById(estateId).throwIfNotFound(), Bag.query().where({ estateId, blockId: ground.block.id }).whereNot({ state: 'void' }).select('id', 'vines')]);
  const zoneByBag = new Map(bags.map((bag) => [bag.id, zoneOfBag(ground, zoneOf, bag.vines)]));
  const dayOf = dayIn(estate.timeZone);
  const reasonThen = options.until ? await exclusionsAt(estateId, rows, options.until) : null;
  const stateThen = options.until ? await labStatesAt(estateId, options.until) : null;
  return rows.map((row) => {
    const vine = vineOf(ground, row);
    const isOfBag = vine < 0 && row.bagId !== null;
    return {
      id: row.id,
      measureCode: row.measureCode,
      value: countedValue(row.value, row.flags as string[]),
      samples: row.samples,
      zone: isOfBag ? (zoneByBag.get(row.bagId!) ?? 0) : vine < 0 ? 0 : zoneOf[vine]!,
      visit: dayOf(row.takenAt),
      receivedOn: dayOf(row.receivedAt),
      // Somebody who settled a conflict said that a `separate` one was a vine of its own.
      vineKey: isOfBag ? `bag ${row.bagId}` : vine < 0 || (row.flags as string[]).includes('separate') ? row.id : String(vine),
      roundId: row.roundId,
      seasonId: row.seasonId,
      state: stateThen === null || row.source !== 'lab' ? row.state : (stateThen.get(row.id) ?? 'provisional'),
      excludedReason: reasonThen?.has(row.id) ? reasonThen.get(row.id)! : row.excludedReason,
      wetFruit: Array.isArray(row.flags) && row.flags.includes('wetFruit'),
      vine,
    };
  });
}

function correctionsBy(until: Date | null) {
  const later = Reading.query().alias('later').whereColumn('later.supersedes', 'readings.id').whereColumn('later.estateId', 'readings.estateId');
  return until === null ? later : later.where('later.receivedAt', '<=', until);
}

/** What the history says of readings that were left out, or taken in again, after that moment: their reason as it stood then. */
async function exclusionsAt(estateId: string, rows: readonly Pick<Reading, 'id' | 'earlierFileId' | 'excludedReason'>[], until: Date): Promise<Map<string, string | null>> {
  const later = await AuditEntry.query()
    .where({ estateId, subjectType: 'reading' })
    .whereIn('action', ['readings.exclude', 'readings.include'])
    .where('at', '>', until)
    .whereIn('subjectId', rows.map(({ id }) => id))
    .orderBy('id', 'desc');
  const deeds = [...later.map(({ id, subjectId, before }) => ({ at: id, readings: [[subjectId, (before as { excludedReason: string | null } | null)?.excludedReason ?? null] as const] })), ...(await conflictsSince(estateId, until))];
  // Newest first, so that the first deed after that moment is written last and its "before" stays.
  const then = new Map(deeds.sort((a, b) => b.at - a.at).flatMap(({ readings }) => readings));
  // A whole table taken back after that moment was still counted then.
  const files = await EarlierFile.query().where({ estateId, state: 'takenBack' }).where('takenBackAt', '>', until);
  const reasonOf = new Map(files.map(({ id, takenBackReason }) => [id, takenBackReason]));
  for (const { id, earlierFileId, excludedReason } of rows) {
    const reason = earlierFileId === null ? undefined : reasonOf.get(earlierFileId);
    if (reason !== undefined && (then.has(id) ? then.get(id)! : excludedReason) === reason) then.set(id, null);
  }
  return then;
}

/** What answers to conflicts, given or taken back after that moment, changed: each reading with its reason before. */
async function conflictsSince(estateId: string, until: Date): Promise<{ at: number; readings: (readonly [string, string | null])[] }[]> {
  const entries = await AuditEntry.query().where({ estateId, subjectType: 'conflict' }).whereIn('action', ['conflicts.settle', 'conflicts.reopen']).where('at', '>', until);
  return entries.map(({ id, after }) => {
    const { done, takenIn = [] } = after as { done?: { leftOut?: string[] }; takenIn?: { id: string; reason: string }[] };
    return { at: id, readings: [...(done?.leftOut ?? []).map((reading) => [reading, null] as const), ...takenIn.map((one) => [one.id, one.reason] as const)] };
  });
}

/** The state of the lab's figures as the history had it at that moment; a figure that it does not name had not been checked. */
async function labStatesAt(estateId: string, until: Date): Promise<Map<string, Reading['state']>> {
  const marked = await AuditEntry.query().where({ estateId, action: 'lab.state' }).where('at', '<=', until).orderBy('id');
  return new Map(marked.flatMap(({ after }) => {
    const { state, resultIds } = after as { state: Reading['state']; resultIds: string[] };
    return resultIds.map((id) => [id, state] as const);
  }));
}

const reachM = 3;

function vineOf(ground: BlockVines, row: Reading): number {
  const byRow = indexOfVine(ground, row.rowId, row.ordinal);
  const position = row.position as Point | null;
  if (byRow >= 0 || position === null) return byRow;
  const [x, y] = toUtm([position.coordinates[0]!, position.coordinates[1]!], ground.block.epsg);
  let best = -1;
  let bestSquare = reachM * reachM;
  for (let vine = 0; vine < ground.vines.count; vine++) {
    const square = (ground.vines.x[vine]! - x) ** 2 + (ground.vines.y[vine]! - y) ** 2;
    if (square < bestSquare) {
      bestSquare = square;
      best = vine;
    }
  }
  return best;
}

/** Stands in forecasts and lots: not left out, and by now more than a figure of the lab that nobody has checked. */
export function isFirm({ excludedReason, state }: Pick<ZonedReading, 'excludedReason' | 'state'>): boolean {
  return excludedReason === null && state !== 'provisional';
}

/** Calendar day of an instant in a time zone, as yyyy-mm-dd. */
function dayIn(timeZone: string): (at: Date) => string {
  const format = new Intl.DateTimeFormat('en-CA', { timeZone, year: 'numeric', month: '2-digit', day: '2-digit' });
  return (at) => format.format(at);
}
