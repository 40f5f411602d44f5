import { reviewForecasts, type ForecastRecord } from '../../../shared/cellar/forecastReview.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { dayIn } from '../../../shared/season/dayIn.ts';
import type { NoticeBody } from '../../../shared/contracts/notices.ts';
import type { ReviewView } from '../../../shared/contracts/tickets.ts';
import type { Access } from '../../access/access.ts';
import { loadBlockVinesAt } from '../../ground/blockVines.ts';
import { endOfEstateDay } from '../../ground/estateDay.ts';
import { Estate } from '../../models/Estate.ts';
import { PickNotice } from '../../models/PickNotice.ts';
import { ScaleTicket } from '../../models/ScaleTicket.ts';
import { findScenario, lotViews } from './board.ts';
import { countingTickets } from './countingTickets.ts';
import { loadBoardGround, type BoardGround } from './boardGround.ts';
import { lotsThen } from './lotsThen.ts';
import { forecastDates, lotForecast, reviewZones, type KnownOn } from './reviewZones.ts';
import { splitsToday } from './splitsToday.ts';
import { usedFactors } from './usedFactors.ts';
import { figureOf } from './zoneOutlook.ts';
import { zoneQuestion } from './zoneQuestion.ts';

type Summary = ReviewView['summary'];
interface Judged {
  forecast: { value: number; halfWidth: number | null } | null;
  actualT: number | null;
}

/** The season's forecasts against the scale, where their error came from, and whether zones told apart what was picked. Never people. */
export async function seasonReview(access: Access, options: { today: string }): Promise<ReviewView> {
  const { estateId } = access;
  const scenario = await findScenario(access, { scenarioId: null, today: options.today });
  const ground = await loadBoardGround(estateId, scenario, await usedFactors(estateId));
  const lots = await lotViews(access, ground);
  const { timeZone } = await Estate.query().findById(estateId).select('timeZone').throwIfNotFound();
  const [tickets, notices] = await Promise.all([
    ScaleTicket.query().where({ estateId }).whereIn('lotId', lots.map((lot) => lot.id)),
    PickNotice.query().where({ estateId }).whereIn('lotId', lots.map((lot) => lot.id)).orderBy('number'),
  ]);
  const counting = await splitsToday(estateId, ground, countingTickets(tickets));
  const dayOf = (at: Date) => dayIn(timeZone, at);
  const firstDays = lots.map((lot) => counting.filter((ticket) => ticket.lotId === lot.id).map(({ weighedAt }) => dayOf(weighedAt)).sort()[0] ?? null);
  const knownOn = await knownOnDays(estateId, ground, { scenarioId: scenario.id, days: [...firstDays.flatMap((day) => day ?? []), ...ground.blocks.flatMap((block) => forecastDates(ground, counting, { block, dayOf }))] });
  const reviewed = lots.map((lot, index): ReviewView['lots'][number] => {
    const own = counting.filter((ticket) => ticket.lotId === lot.id);
    const actualT = own.length === 0 ? null : own.reduce((sum, ticket) => sum + ticket.netKg, 0) / 1000;
    const first = firstOfItsFruit(notices.filter((notice) => notice.lotId === lot.id));
    const firstDay = firstDays[index]!;
    const known = first || firstDay === null ? null : lotForecast(ground, index, { day: firstDay, knownOn });
    // Without a notice a lot that was weighed is judged by what was known when its first load came in.
    const forecast = first ? (first.body as NoticeBody).tonnes : known ? figureOf(known, { n: null, kind: 'estimated' }) : lot.summary.tonnes;
    const held = actualT === null || forecast === null || forecast.halfWidth === null ? null : Math.abs(actualT - forecast.value) <= forecast.halfWidth;
    return { lotId: lot.id, lotName: lot.name, forecast, forecastFrom: first ? 'notice' : known ? 'known' : 'today', forecastOn: first ? dayOf(first.sentAt) : known ? firstDay : null, actualT, tickets: own.length, held };
  });
  const { zones, parts, partsOf } = reviewZones(ground, counting, { dayOf, knownOn });
  const lastOf = [...groupBy(zones, ({ blockId, zone }) => `${blockId}|${zone}`).values()].map((group) => group.at(-1)!);
  return {
    seasonId: ground.season.id,
    seasonName: ground.season.name,
    closed: ground.season.closedAt !== null,
    lots: reviewed,
    summary: summaryOf(reviewed),
    zones,
    byBlock: [...groupBy(lastOf, ({ blockName }) => blockName)].map(([blockName, group]) => ({ blockName, ...summaryOf(group) })),
    byDate: [...groupBy(zones, ({ forecastOn }) => forecastOn)].sort(([a], [b]) => a.localeCompare(b)).map(([forecastOn, group]) => ({ forecastOn, ...summaryOf(group) })),
    errorParts: parts,
    blocks: await Promise.all(ground.blocks.map(async (block) => ({ ...(await zoneQuestion(estateId, ground, { block, tickets: counting })), errorParts: partsOf(block.ground.block.id) }))),
  };
}

/** The first notice for the fruit that the last one names: one for other zones forecast something else. */
function firstOfItsFruit(notices: readonly PickNotice[]): PickNotice | undefined {
  const zonesOf = ({ body }: PickNotice) => JSON.stringify((body as NoticeBody).zones);
  const last = notices.at(-1);
  return last && notices.find((notice) => zonesOf(notice) === zonesOf(last));
}

/** What was known of vines and factors at the end of each of these days, loaded once. */
async function knownOnDays(estateId: string, ground: BoardGround, { scenarioId, days }: { scenarioId: string; days: readonly string[] }): Promise<KnownOn> {
  const loaded = new Map(await Promise.all([...new Set(days)].map(async (day) => {
    const until = await endOfEstateDay(estateId, day);
    const factors = await usedFactors(estateId, { until, stood: await lotsThen(estateId, scenarioId, until) });
    const census = await Promise.all(ground.blocks.map(async (block) => [block.ground.block.id, await loadBlockVinesAt(estateId, block.ground.block.id, until)] as const));
    return [day, { factors, census: new Map(census) }] as const;
  })));
  return (block, day) => {
    const { factors, census } = loaded.get(day)!;
    return { factors, census: census.get(block.ground.block.id)! };
  };
}

function summaryOf(lines: readonly Judged[]): Summary {
  const records = lines.flatMap(({ forecast, actualT }): ForecastRecord[] =>
    forecast === null || forecast.halfWidth === null || actualT === null
      ? []
      : [
          {
            forecast: forecast.value,
            lower: forecast.value - forecast.halfWidth,
            upper: forecast.value + forecast.halfWidth,
            actual: actualT,
          },
        ],
  );
  const { n, bias, meanAbsoluteError, meanRelativeError, held, few } = reviewForecasts(records);
  const told = (value: number) => (Number.isNaN(value) ? null : value);
  return { n, bias: told(bias), meanAbsoluteError: told(meanAbsoluteError), meanRelativeError: told(meanRelativeError), held, few };
}
