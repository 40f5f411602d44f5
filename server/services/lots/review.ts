import { reviewForecasts } from '../../../shared/cellar/forecastReview.ts';
import type { NoticeBody } from '../../../shared/contracts/notices.ts';
import type { ReviewView } from '../../../shared/contracts/tickets.ts';
import { compareMeans } from '../../../shared/sampling/anova.ts';
import type { Access } from '../../access/access.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { PickNotice } from '../../models/PickNotice.ts';
import { ScaleTicket } from '../../models/ScaleTicket.ts';
import { findScenario, lotViews } from './board.ts';
import { loadBoardGround, type BoardBlock } from './boardGround.ts';

/** Three measures are looked at, so each is asked at a third of 5 % (Bonferroni): zones are not kept by luck. */
const asked = ['brix', 'ph', 'ta'] as const;
const level = 0.05 / asked.length;

/** The season's forecasts against the scale, and whether zones told apart what was picked. Never people. */
export async function seasonReview(access: Access, options: { today: string }): Promise<ReviewView> {
  const { estateId } = access;
  const scenario = await findScenario(access, { scenarioId: null, today: options.today });
  const ground = await loadBoardGround(estateId, scenario);
  const lots = await lotViews(access, ground);
  const [tickets, notices, measures] = await Promise.all([
    ScaleTicket.query().where({ estateId }).whereIn('lotId', lots.map((lot) => lot.id)),
    PickNotice.query().where({ estateId }).whereIn('lotId', lots.map((lot) => lot.id)).orderBy('number'),
    MeasureRecord.query().where({ estateId }).whereIn('code', [...asked]),
  ]);
  const reviewed = lots.map((lot): ReviewView['lots'][number] => {
    const counting = tickets.filter((ticket) => ticket.lotId === lot.id && !tickets.some((other) => other.corrects === ticket.id));
    const actualT = counting.length === 0 ? null : counting.reduce((sum, ticket) => sum + ticket.netKg, 0) / 1000;
    const first = notices.find((notice) => notice.lotId === lot.id);
    const forecast = first ? (first.body as NoticeBody).tonnes : lot.summary.tonnes;
    const held = actualT === null || forecast === null || forecast.halfWidth === null ? null : Math.abs(actualT - forecast.value) <= forecast.halfWidth;
    return { lotId: lot.id, lotName: lot.name, forecast, forecastOn: first?.sentAt.toISOString().slice(0, 10) ?? null, actualT, tickets: counting.length, held };
  });
  return {
    seasonId: ground.season.id,
    seasonName: ground.season.name,
    closed: ground.season.closedAt !== null,
    lots: reviewed,
    summary: summaryOf(reviewed),
    blocks: ground.blocks.map((block) => zoneQuestion(block, measures)),
  };
}

function summaryOf(lots: ReviewView['lots']): ReviewView['summary'] {
  const records = lots.flatMap(({ forecast, actualT }) => (forecast === null || forecast.halfWidth === null || actualT === null ? [] : [{ forecast: forecast.value, lower: forecast.value - forecast.halfWidth, upper: forecast.value + forecast.halfWidth, actual: actualT }]));
  const { n, bias, meanAbsoluteError, meanRelativeError, held, few } = reviewForecasts(records);
  const told = (value: number) => (Number.isNaN(value) ? null : value);
  return { n, bias: told(bias), meanAbsoluteError: told(meanAbsoluteError), meanRelativeError: told(meanRelativeError), held, few };
}

/** Did the zones of a block differ in their fruit on the newest day that all of them were read? */
function zoneQuestion({ ground, zones, outlooks }: BoardBlock, measures: MeasureRecord[]): ReviewView['blocks'][number] {
  const compared = measures.flatMap((measure) => {
    const means = outlooks.flatMap((outlook) => outlook.latest[measure.code as (typeof asked)[number]] ?? []);
    const on = means.map(({ visit }) => visit).sort().at(-1);
    const same = means.filter(({ visit, n }) => visit === on && n >= 2);
    if (on === undefined || same.length < 2 || same.length < zones.length) return [];
    const { p } = compareMeans(same.map(({ n, mean, sd }) => ({ n, mean, variance: sd * sd })));
    const values = same.map(({ mean }) => mean);
    return [{ measure: measure.code, unit: measure.unit, on, n: same.reduce((sum, { n }) => sum + n, 0), least: Math.min(...values), most: Math.max(...values), p: Number.isNaN(p) ? null : p, differ: Number.isNaN(p) ? null : p < level }];
  });
  const verdict = zones.length < 2 ? 'oneZone' : compared.length === 0 ? 'notRead' : compared.some(({ differ }) => differ === true) ? 'keep' : 'cannotTell';
  return { blockId: ground.block.id, blockName: ground.block.name, zones: zones.length, measures: compared, verdict };
}
