import { seededRandom } from '../../shared/analysis/random.ts';
import { newReading } from '../../shared/contracts/readings.ts';
import type { Access } from '../access/access.ts';
import { Reading } from '../models/Reading.ts';
import { addCrewPerson } from '../services/crew/crewPin.ts';
import { checkIn } from '../services/crew/phones.ts';
import { recordBatch } from '../services/readings/recordBatch.ts';
import type { DemoDays } from './demoDays.ts';
import type { DemoEstate } from './seedEstate.ts';
import { uuidFrom } from './uuidFrom.ts';

/** What a day in the rows leaves for the office: two vines that the manager had counted too, a phone, somebody without e-mail. */
export async function seedField(made: DemoEstate, options: { days: DemoDays; now: Date }): Promise<void> {
  const manager: Access = { estateId: made.estateId, personId: made.personOf('manager'), roles: ['manager'] };
  const crew: Access = { estateId: made.estateId, personId: made.personOf('crew'), roles: ['crew'] };
  const random = seededRandom(41);
  const read = await Reading.query().where({ estateId: made.estateId, personId: crew.personId }).whereNotNull('targetId').orderBy('takenAt').limit(2);
  const readings = read.map(({ blockId, roundId, targetId, rowId, ordinal, measureCode, unit, value, takenAt }, at) =>
    newReading.parse({ id: uuidFrom(random), blockId, roundId, targetId, rowId, ordinal, measureCode, unit, value: value + 3 + at, takenAt: new Date(takenAt.getTime() + 40 * 60_000).toISOString() }));
  await recordBatch(manager, { readings, findings: [] }, options.now);
  await addCrewPerson(manager, { name: 'Inês Vale', language: 'pt', pin: '4711' });
  await checkIn(crew, { deviceId: uuidFrom(random), waiting: 0, isReady: true, deviceTime: options.days.dawn.toISOString() }, options.days.dawn);
}
