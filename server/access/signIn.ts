import { Passport } from 'passport';
import { Strategy } from 'passport-local';
import { Person } from '../models/Person.ts';
import { passwordMatches } from './passwords.ts';

/** Passport with the e-mail and password strategy. Demo people are refused where the demo is not asked for. */
export function makePassport(options: { allowDemo: boolean }): InstanceType<typeof Passport> {
  const passport = new Passport();
  passport.use(
    new Strategy({ usernameField: 'email' }, (email, password, done) => {
      findPerson(email, password, options.allowDemo).then(
        (person) => done(null, person ? { id: person.id } : false),
        (error: unknown) => done(error),
      );
    }),
  );
  passport.serializeUser((user, done) => done(null, user.id));
  passport.deserializeUser((id: string, done) => {
    Person.query()
      .findById(id)
      .then(
        (person) => done(null, person && (options.allowDemo || !person.isDemo) ? { id: person.id } : false),
        (error: unknown) => done(error),
      );
  });
  return passport;
}

async function findPerson(email: string, password: string, allowDemo: boolean): Promise<Person | null> {
  const person = await Person.query().findOne({ email: email.trim().toLowerCase() });
  const usable = person !== undefined && (allowDemo || !person.isDemo);
  const matches = await passwordMatches(usable ? person.passwordHash : null, password);
  return matches && person ? person : null;
}
