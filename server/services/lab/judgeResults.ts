import type { BagLine } from '../../../shared/contracts/bags.ts';
import type { LabGroup, LabResult } from '../../../shared/contracts/lab.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { countedValue } from '../../../shared/lab/belowDetection.ts';
import { flagWithinGroups } from '../../../shared/sampling/outliers.ts';
import { intervalOf, meanEstimate } from '../../../shared/sampling/precision.ts';
import { summarise } from '../../../shared/sampling/variances.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import type { MeasureRecord } from '../../models/MeasureRecord.ts';

/**
 * Figures of a measure by zone and day of picking, by the estate's own calendar. Marked are those far from the rest of their
 * zone by the modified z-score with one scale for all zones of the day (Iglewicz & Hoaglin 1993, limit 3.5), and those
 * outside the usual range. Marked figures count like any other until somebody leaves them out with a reason; the interval
 * is shown both ways, before and after.
 */
export function judgeResults(results: readonly LabResult[], bags: readonly BagLine[], { measures, timeZone }: { measures: readonly MeasureRecord[]; timeZone: string }): LabGroup[] {
  const bagOf = new Map(bags.map((bag) => [bag.id, bag]));
  const placed = results.filter(({ bagId }) => bagOf.get(bagId)?.closedAt);
  const dayOf = (result: LabResult) => dayIn(timeZone, new Date(bagOf.get(result.bagId)!.closedAt!));
  const days = groupBy(placed, (result) => `${result.measureCode}|${bagOf.get(result.bagId)!.blockId}|${dayOf(result)}`);
  return [...days.values()].flatMap((ofDay) => {
    const measure = measures.find(({ code }) => code === ofDay[0]!.measureCode);
    if (!measure) return [];
    const zones = [...groupBy(ofDay, ({ bagId }) => String(bagOf.get(bagId)!.zone)).values()];
    const counted = zones.map((zone) => zone.filter(({ excludedReason }) => excludedReason === null));
    const flags = flagWithinGroups(counted.map((zone) => zone.map(figureOf)), { resolution: 10 ** -measure.decimals });
    return zones.map((zone, at): LabGroup => {
      const outliers = counted[at]!.filter((_, place) => flags[at]![place]).map(({ id }) => id);
      const outside = counted[at]!.filter((result) => !result.below && (result.value < measure.minimum || result.value > measure.maximum)).map(({ id }) => id);
      const bag = bagOf.get(zone[0]!.bagId)!;
      const unmarked = counted[at]!.filter(({ id }) => !outliers.includes(id) && !outside.includes(id));
      return {
        measure: measure.code, blockName: bag.blockName, zone: bag.zone, zoneName: bag.zoneName, day: dayOf(zone[0]!), confidence: measure.confidence,
        resultIds: zone.map(({ id }) => id), outliers, outside, below: zone.filter(({ below }) => below).length,
        withAll: intervalFor(counted[at]!, measure.confidence), withoutMarked: intervalFor(unmarked, measure.confidence),
        withLeftOut: counted[at]!.length < zone.length ? intervalFor(zone, measure.confidence) : null,
      };
    });
  }).sort((a, b) => b.day.localeCompare(a.day) || a.measure.localeCompare(b.measure) || (a.blockName ?? '').localeCompare(b.blockName ?? '') || (a.zone ?? 0) - (b.zone ?? 0));
}

const figureOf = ({ value, flags }: LabResult) => countedValue(value, flags);

/** One value a bag, repeats averaged; a single bag says nothing of the spread. */
function intervalFor(results: readonly LabResult[], confidence: number): LabGroup['withAll'] {
  const perBag = [...groupBy(results, ({ bagId }) => bagId).values()].map((same) => same.reduce((sum, result) => sum + figureOf(result), 0) / same.length);
  if (perBag.length === 0) return null;
  const { n, mean, sd } = summarise(perBag);
  const { halfWidth } = intervalOf(meanEstimate({ n, mean, sd, populationSize: Infinity }), confidence);
  return { n, mean, halfWidth: Number.isFinite(halfWidth) ? halfWidth : null };
}
