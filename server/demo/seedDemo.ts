import { dayIn } from '../../shared/season/dayIn.ts';
import { Estate } from '../models/Estate.ts';
import { demoDays } from './demoDays.ts';
import { placeOn } from './demoPlace.ts';
import { makeGround } from './ground.ts';
import { seedBlocks } from './seedBlocks.ts';
import { seedEstate } from './seedEstate.ts';
import { seedFruit } from './seedFruit.ts';
import { seedField } from './seedField.ts';
import { seedHarvest } from './seedHarvest.ts';
import { seedLab } from './seedLab.ts';
import { seedLayers } from './seedLayers.ts';
import { seedLots } from './seedLots.ts';
import { seedPlans } from './seedPlans.ts';
import { seedZones } from './seedZones.ts';

const groundSeed = 7;

export type SeedStep = 'estate' | 'blocks' | 'layers' | 'fruit' | 'zones' | 'plans' | 'lots' | 'harvest';

/**
 * Lays the demo estate unless there is one. The same seed gives the same estate; its calendar is laid around today, and
 * its place is one where fruit ripens today.
 * Needs the compute pool and the file store open. Returns false when the demo estate was there already.
 */
export async function seedDemo(options: { now: Date; reset: boolean; onStep?: (step: SeedStep) => void }): Promise<boolean> {
  const step = options.onStep ?? (() => undefined);
  if (options.reset) await eraseDemo();
  else if (await Estate.query().findOne({ isDemo: true })) return false;
  const place = placeOn(options.now.toISOString().slice(0, 10));
  const days = demoDays(dayIn(place.timeZone, options.now), options.now);
  const ground = makeGround(groundSeed, place);
  try {
    step('estate');
    const made = await seedEstate(days, place);
    step('blocks');
    const laid = await seedBlocks(made, place, { now: options.now, countedAt: days.at(-200, 9) });
    step('layers');
    await seedLayers(made, ground, days);
    step('fruit');
    await seedFruit(made, laid, { ground, days });
    step('zones');
    await seedZones(made, laid, days);
    step('plans');
    await seedPlans(made, laid, { days, now: options.now });
    await seedField(made, { days, now: options.now });
    await seedLab(made, laid, { days, now: options.now });
    step('lots');
    await seedLots(made, days);
    step('harvest');
    await seedHarvest(made, { days, place, now: options.now });
  } catch (error) {
    // Half a demo would look like a broken estate; the next start lays it anew.
    await eraseDemo();
    throw error;
  }
  return true;
}

/** Takes the demo estate away with everything below it; references are checked once all of it is gone. */
async function eraseDemo(): Promise<void> {
  await Estate.transaction(async (trx) => {
    await trx.raw('set constraints all deferred');
    await Estate.query(trx).where({ isDemo: true }).delete();
  });
}
