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
import type { LaidBlock } from './seedBlocks.ts';
import type { DemoEstate } from './seedEstate.ts';

const most = 4;

/** Names a manager would give, from the lowest vigour up. */
const zoneNames: Record<number, string[]> = { 1: ['Whole block'], 2: ['Marl bank', 'Deep end'], 3: ['Marl bank', 'Middle', 'Hollow'], 4: ['Crest', 'Upper', 'Lower', 'Hollow'] };

/** Zones of every block from this year's vigour and the conductivity; one block is left as a proposal that waits for the manager. */
export async function seedZones(made: DemoEstate, laid: readonly LaidBlock[], now: Date): Promise<void> {
  const agronomist: Access = { estateId: made.estateId, personId: made.personOf('agronomist'), roles: ['agronomist'] };
  const manager: Access = { estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] };
  const layers = await Layer.query().where({ estateId: made.estateId }).whereIn('type', ['vigour', 'conductivity']).orderBy('measuredOn', 'desc');
  const vigour = layers.find((layer) => layer.type === 'vigour')!;
  const conductivity = layers.find((layer) => layer.type === 'conductivity')!;
  for (const { demo, ground } of laid) {
    const input = newZoning.parse({ name: 'Vigour and soil', layers: [vigour, conductivity].map((layer) => ({ layerId: layer.id })), seed: 1 });
    const { zoningId, jobId } = await requestZoning(agronomist, ground.block.id, input, now.toISOString().slice(0, 10));
    const job = await Job.query().findById(jobId).throwIfNotFound();
    const result = await zoningJob.work({ job, report: () => Promise.resolve() });
    await job.$query().patch({ state: 'done', stage: 'done', progress: 1, result: result ?? null, finishedAt: now });
    if (demo.key === 'marl') continue;
    await publishNamed(manager, zoningId, now);
  }
}

async function publishNamed(manager: Access, zoningId: string, now: Date): Promise<void> {
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
