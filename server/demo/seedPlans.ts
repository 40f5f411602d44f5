import { seededRandom } from '../../shared/analysis/random.ts';
import { newPlan } from '../../shared/contracts/planChoices.ts';
import { newReading } from '../../shared/contracts/readings.ts';
import { newRestriction } from '../../shared/contracts/restrictions.ts';
import { newRound } from '../../shared/contracts/rounds.ts';
import type { Access } from '../access/access.ts';
import { zonesInForce } from '../ground/zonesInForce.ts';
import { lockPlan, makePlan } from '../services/plans/writePlan.ts';
import { recordBatch } from '../services/readings/recordBatch.ts';
import { setRestriction } from '../services/restrictions.ts';
import { changeRound } from '../services/rounds/changeRound.ts';
import { makeRound } from '../services/rounds/makeRound.ts';
import type { DemoDays } from './demoDays.ts';
import type { LaidBlock } from './seedBlocks.ts';
import type { DemoEstate } from './seedEstate.ts';
import { uuidFrom } from './uuidFrom.ts';

/** A round that the crew has half walked, another that is planned, and a block that is closed after spraying. */
export async function seedPlans(made: DemoEstate, laid: readonly LaidBlock[], options: { days: DemoDays; now: Date }): Promise<void> {
  const manager: Access = { estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] };
  const crew: Access = { estateId: made.estateId, personId: made.personOf('crew'), roles: ['crew'] };
  const blockOf = (key: string) => laid.find(({ demo }) => demo.key === key)!.ground.block;
  const today = options.days.day(0);
  const furrow = await sendRound(manager, { blockId: blockOf('furrow').id, name: 'Clusters before picking', measure: 'clusterCount', margin: 0.12, onDate: today, gate: 'Lower gate', notes: 'Count all clusters, also small ones.', crew: crew.personId });
  await changeRound(crew, furrow.roundId, { state: 'open' }, options.now);
  await walkHalf(crew, furrow, options);
  await sendRound(manager, { blockId: blockOf('millrace').id, name: 'Clusters, Millrace', measure: 'clusterCount', margin: 0.15, onDate: options.days.day(2), gate: 'Mill bridge', notes: '', crew: crew.personId });
  const spraying = { blockId: blockOf('stile').id, startsAt: options.days.dawn.toISOString(), endsAt: options.days.at(2, 12).toISOString(), product: 'Wettable sulphur', labelInterval: '48 h', noPickBefore: options.days.day(7), note: 'Back half of the block sprayed before sunrise.' };
  await setRestriction(manager, newRestriction.parse(spraying));
}

interface RoundWish {
  blockId: string;
  name: string;
  measure: string;
  margin: number;
  onDate: string;
  gate: string;
  notes: string;
  crew: string;
}

interface SentRound {
  roundId: string;
  blockId: string;
  targets: Awaited<ReturnType<typeof makePlan>>['targets'];
}

async function sendRound(manager: Access, wish: RoundWish): Promise<SentRound> {
  const zoning = await zonesInForce(manager.estateId).findOne({ blockId: wish.blockId }).throwIfNotFound();
  const plan = await makePlan(manager, zoning.id, newPlan.parse({ name: wish.name, measures: [{ code: wish.measure, margin: wish.margin, marginKind: 'relative', confidence: 0.95 }], seed: 12 }));
  await lockPlan(manager, plan.id, new Date(`${wish.onDate}T05:00:00Z`));
  const { id } = await makeRound(manager, plan.id, newRound.parse({ onDate: wish.onDate, people: [wish.crew], gate: wish.gate, notes: wish.notes }), { publicUrl: 'http://localhost' });
  return { roundId: id, blockId: wish.blockId, targets: plan.targets };
}

/** The first half of the walk, in its order, one vine a minute and a half. */
async function walkHalf(crew: Access, round: SentRound, { days, now }: { days: DemoDays; now: Date }): Promise<void> {
  const random = seededRandom(99);
  const inOrder = [...round.targets].sort((a, b) => (a.walkOrder ?? 0) - (b.walkOrder ?? 0));
  const readings = inOrder.slice(0, Math.ceil(inOrder.length / 2)).map((target, index) =>
    newReading.parse({
      id: uuidFrom(random),
      blockId: round.blockId,
      roundId: round.roundId,
      targetId: target.id,
      rowId: target.rowId,
      ordinal: target.ordinal,
      measureCode: 'clusterCount',
      value: Math.max(3, Math.round(13 + 5 * target.zone + 8 * (random() - 0.5))),
      unit: 'clusters',
      takenAt: new Date(days.dawn.getTime() + index * 90_000).toISOString(),
    }),
  );
  await recordBatch(crew, { readings, findings: [] }, now);
}
