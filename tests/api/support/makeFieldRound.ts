import { randomUUID } from 'node:crypto';
import { loadBlockVines, zonesOfVines } from '../../../server/ground/blockVines.ts';
import { fromGeoJson } from '../../../server/models/geometry.ts';
import { Plan } from '../../../server/models/Plan.ts';
import { Round } from '../../../server/models/Round.ts';
import { RoundPerson } from '../../../server/models/RoundPerson.ts';
import { Target } from '../../../server/models/Target.ts';
import { Zoning } from '../../../server/models/Zoning.ts';
import { vineWords } from '../../../server/services/plans/viewPlan.ts';
import { planChoices } from '../../../shared/contracts/planChoices.ts';
import { makeStripBlock } from './makeStripBlock.ts';
import type { Agent, TestApp } from './testApp.ts';

interface VinePlace {
  rowId: string;
  rowLabel: string;
  ordinal: number;
  vineNumber: number;
}

export interface FieldRoundMade {
  estateId: string;
  blockId: string;
  blockName: string;
  zoningId: string;
  roundId: string;
  manager: Agent;
  managerId: string;
  crew: { id: string; name: string; email: string; agent: Agent }[];
  targets: (VinePlace & { id: string; reserve: VinePlace })[];
  reading: (vine: number, over?: object) => { id: string } & Record<string, unknown>;
  finding: (vine: number, state?: string) => { id: string } & Record<string, unknown>;
}

/** A round of so many vines spread over a block, every one sent to every person of the crew, laid straight into the tables. */
export async function makeFieldRound(app: TestApp, { vines, crew: crewSize }: { vines: number; crew: number }): Promise<FieldRoundMade> {
  const estate = await app.addEstate();
  const { estateId } = estate;
  const block = await makeStripBlock(estate, { name: 'Long Field' });
  const managerPerson = await app.addPerson(estateId, 'manager', 'Mara Thorn');
  const people = [];
  for (let i = 0; i < crewSize; i++) {
    const name = ['Ana Reed', 'Ben Moor', 'Cleo Lane', 'Dino Wold'][i] ?? `Crew ${i}`;
    const person = await app.addPerson(estateId, 'crew', name);
    people.push({ ...person, name, agent: await app.as(person.email) });
  }
  const ground = await loadBlockVines(estateId, block.blockId);
  const zoneOf = zonesOfVines(ground, await Zoning.query().findById(block.zoningId).throwIfNotFound());
  const step = Math.floor(ground.vines.count / (vines + 1));
  const at = Array.from({ length: vines }, (_, i) => Math.min(ground.vines.count - 2, (i + 1) * step)).map((vine) => (ground.vines.row[vine + 1] === ground.vines.row[vine] ? vine : vine - 1));
  const measures = [{ code: 'clusterCount', margin: 0.1, marginKind: 'relative' as const, confidence: 0.95 as const }];
  const basis = { blockName: 'Long Field', zones: block.zoneIds.map((id, i) => ({ id, number: i + 1, name: `Strip ${i + 1}`, colour: null, vines: 1300 })), measures: [] };
  const plan = await Plan.query().insert({ estateId, blockId: block.blockId, zoningId: block.zoningId, seasonId: block.seasonId, name: 'Cluster count', state: 'locked', isPilot: false, options: planChoices.parse({ measures }), result: { basis, counts: { visits: 1, hours: 1 }, draw: [], walk: null }, seed: 1, engineVersion: 'test', draws: JSON.stringify([]) as never });
  const place = (vine: number): VinePlace => vineWords(ground, ground.stored[ground.vines.row[vine]!]!.id, ground.vines.ordinal[vine]!);
  const rows = await Target.query().insert(at.map((vine, i) => ({
    estateId, planId: plan.id, zoneId: block.zoneIds[Math.max(0, zoneOf[vine]! - 1)]!, rowId: place(vine).rowId, ordinal: place(vine).ordinal, position: fromGeoJson({ type: 'Point', coordinates: [2.4, 43.1] }) as never,
    drawOrder: i + 1, walkOrder: i + 1, reserveRowId: place(vine + 1).rowId, reserveOrdinal: place(vine + 1).ordinal, measureCodes: ['clusterCount'],
  })));
  const targets = at.map((vine, i) => ({ ...place(vine), id: rows[i]!.id, reserve: place(vine + 1) }));
  const stops = targets.map(({ id }, i) => ({ targetId: id, number: i + 1, enterBy: 'start', heading: 'toEnd', ahead: 3, aheadFrom: 'entry', opensZone: false }));
  const round = await Round.query().insert({ estateId, planId: plan.id, blockId: block.blockId, onDate: '2026-09-01', state: 'open', walk: { shares: people.map(({ id }) => ({ personId: id, lengthM: 0, walkingS: 0, serviceS: 0, stops })) } });
  await RoundPerson.query().insert(people.map(({ id }) => ({ estateId, roundId: round.id, personId: id, targetIds: targets.map((target) => target.id) })));
  const head = (vine: number) => ({ id: randomUUID(), blockId: block.blockId, roundId: round.id, rowId: targets[vine]!.rowId, ordinal: targets[vine]!.ordinal });
  return {
    estateId, blockId: block.blockId, blockName: 'Long Field', zoningId: block.zoningId, roundId: round.id, managerId: managerPerson.id, manager: await app.as(managerPerson.email), crew: people, targets,
    reading: (vine, over = {}) => ({ ...head(vine), targetId: targets[vine]!.id, measureCode: 'clusterCount', value: 20 + vine, unit: 'clusters', takenAt: `2026-09-01T08:${String(vine % 60).padStart(2, '0')}:00Z`, ...over }),
    finding: (vine, state = 'missing') => ({ ...head(vine), state, notedAt: '2026-09-01T08:00:00Z' }),
  };
}
