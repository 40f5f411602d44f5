import type { ZoningPresence } from '../../../shared/contracts/zonings.ts';
import type { Access } from '../../access/access.ts';
import { Person } from '../../models/Person.ts';
import { Zoning } from '../../models/Zoning.ts';
import { ZoningEditor } from '../../models/ZoningEditor.ts';
import { lastChange } from './editZones.ts';

/** Screens tell every twenty seconds that they are open; three times missed, and the person has gone. */
const goneAfterMs = 60_000;

/** Says that this person has the zones open, and answers who else has and whether the zones moved on. Not audited: nothing of the estate changes. */
export async function keepPresence(access: Access, zoningId: string, now: Date): Promise<ZoningPresence> {
  const { estateId, personId } = access;
  const zoning = await Zoning.query().findOne({ estateId, id: zoningId }).throwIfNotFound().select('id', 'revision');
  await ZoningEditor.query().where({ estateId, zoningId }).where('seenAt', '<', new Date(now.getTime() - goneAfterMs)).delete();
  await ZoningEditor.query().insert({ estateId, zoningId, personId, seenAt: now }).onConflict(['zoning_id', 'person_id']).merge(['seen_at']);
  const others = await ZoningEditor.query().where({ estateId, zoningId }).whereNot({ personId }).orderBy('seenAt', 'desc');
  const people = await Person.query().findByIds(others.map((other) => other.personId)).select('id', 'name');
  const last = await lastChange(access, zoningId);
  return {
    revision: zoning.revision,
    changedBy: last?.personId ? ((await Person.query().findById(last.personId))?.name ?? null) : null,
    others: others.map((other) => ({ name: people.find((person) => person.id === other.personId)?.name ?? '', seenAt: other.seenAt.toISOString() })),
  };
}
