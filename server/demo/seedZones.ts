import { newZoning } from '../../shared/contracts/zonings.ts';
import type { Access } from '../access/access.ts';
import { Job } from '../models/Job.ts';
import { Layer } from '../models/Layer.ts';
import { Zone } from '../models/Zone.ts';
import { Zoning } from '../models/Zoning.ts';
import { editZones, keepAsDraft } from '../services/zonings/editZones.ts';
import { publishZones } from '../services/zonings/publish.ts';
import { requestZoning } from '../services/zonings/request.ts';
import { zoningJob } from '../services/zonings/runZoning.ts';
import type { DemoDays } from './demoDays.ts';
import type { LaidBlock } from './seedBlocks.ts';
import type { DemoEstate } from './seedEstate.ts';

const most = 4;

/** Names a manager would give, from the lowest vigour up. */
const zoneNames: Record<number, string[]> = { 1: ['Whole block'], 2: ['Marl bank', 'Deep end'], 3: ['Marl bank', 'Middle', 'Hollow'], 4: ['Crest', 'Upper', 'Lower', 'Hollow'] };

/** Blocks that were zoned a year ago too, so that whoever is new sees what stays and what moves; each costs a run. */
const zonedBefore = ['heron', 'furrow'];

/** A year ago zones from that year's vigour, before the soil was surveyed; now of every block from vigour and conductivity; one block is left as a proposal that waits for the manager. */
export async function seedZones(made: DemoEstate, laid: readonly LaidBlock[], days: DemoDays): Promise<void> {
  const layers = await Layer.query().where({ estateId: made.estateId }).whereIn('type', ['vigour', 'conductivity']).orderBy('measuredOn', 'desc');
  const [vigour, vigourBefore] = layers.filter(({ type }) => type === 'vigour');
  const conductivity = layers.find(({ type }) => type === 'conductivity')!;
  const before = days.at(-390, 9);
  for (const { ground } of laid.filter(({ demo }) => zonedBefore.includes(demo.key))) {
    await publishNamed(made, await runZoning(made, { blockId: ground.block.id, name: 'Vigour', layers: [vigourBefore!], isPast: true }, before), before);
  }
  const now = days.at(-55, 9);
  for (const { demo, ground } of laid) {
    const zoningId = await runZoning(made, { blockId: ground.block.id, name: 'Vigour and soil', layers: [vigour!, conductivity] }, now);
    if (demo.key !== 'marl') await publishNamed(made, zoningId, now);
  }
}

async function runZoning(made: DemoEstate, { blockId, name, layers, isPast = false }: { blockId: string; name: string; layers: readonly Layer[]; isPast?: boolean }, now: Date): Promise<string> {
  const agronomist: Access = { estateId: made.estateId, personId: made.personOf('agronomist'), roles: ['agronomist'] };
  const input = newZoning.parse({ name, layers: layers.map(({ id }) => ({ layerId: id })), seed: 1 });
  const { zoningId, jobId } = await requestZoning(agronomist, blockId, input, now.toISOString().slice(0, 10));
  // Readings of later days do not speak of it; this year's run takes all there are, so that the demo shows what they say.
  if (isPast) await Zoning.query().findById(zoningId).patch({ createdAt: now });
  const job = await Job.query().findById(jobId).throwIfNotFound();
  const result = await zoningJob.work({ job, report: () => Promise.resolve() });
  await job.$query().patch({ state: 'done', stage: 'done', progress: 1, result: result ?? null, finishedAt: now });
  return zoningId;
}

async function publishNamed(made: DemoEstate, zoningId: string, now: Date): Promise<void> {
  const manager: Access = { estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] };
  const { advisedZones } = await Zoning.query().findById(zoningId).throwIfNotFound();
  // More than four zones are more than a crew can keep apart; the manager takes the smaller number.
  const count = Math.min(most, Math.max(1, advisedZones ?? 1));
  await keepAsDraft(manager, zoningId, count);
  const revision = async () => (await Zoning.query().findById(zoningId).throwIfNotFound()).revision;
  const zones = await Zone.query().where({ estateId: manager.estateId, zoningId }).orderBy('number').select('number');
  for (const [index, { number }] of zones.entries()) {
    await editZones(manager, zoningId, { operation: { kind: 'rename', zone: number, name: (zoneNames[zones.length] ?? [])[index] ?? null }, reason: '', revision: await revision() });
  }
  await publishZones(manager, zoningId, { reason: 'Agreed with the agronomist', revision: await revision(), now });
}
