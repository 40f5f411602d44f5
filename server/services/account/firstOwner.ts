import { newEstate, type NewEstate } from '../../../shared/contracts/estate.ts';
import { Unusable } from '../../errors.ts';
import { Person } from '../../models/Person.ts';
import { createEstate } from '../estates.ts';
import { say } from '../../sentences/say.ts';

/** What whoever runs the server says of an owner. Without `estate` the address must be known already. */
export interface OwnerRequest {
  email: string;
  name: string | null;
  estate: Partial<NewEstate> & { name: string } | null;
}

/**
 * Makes a person (without a password yet) and an estate of theirs, as far as they are asked for and not there. On a server
 * without the demo this is how the first owner comes in. Nothing is made when something is missing.
 */
export async function makeOwner({ email, name, estate }: OwnerRequest, now: Date): Promise<{ madePerson: boolean; madeEstate: boolean }> {
  const known = await Person.query().findOne({ email });
  if (!known && (name === null || estate === null)) throw new Unusable('newOwner', say('newOwner', { email }));
  if (known?.isDemo) throw new Unusable('demoPerson', say('demoPersonOwns'));
  const facts = estate === null ? null : newEstate.parse(estate);
  const person = known ?? (await Person.query().insert({ email, name: name!, language: facts!.languages[0]! }));
  if (facts) await createEstate(person.id, facts, now.toISOString().slice(0, 10));
  return { madePerson: !known, madeEstate: facts !== null };
}
