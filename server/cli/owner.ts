import { parseArgs } from 'node:util';
import { ZodError } from 'zod';
import { resetRequest } from '../../shared/contracts/account.ts';
import { readConfig } from '../config.ts';
import { openDatabase } from '../db.ts';
import { ExpectedError } from '../errors.ts';
import { makeOwner } from '../services/account/firstOwner.ts';
import { linkFor } from '../services/account/resetPassword.ts';

/**
 * Lets an owner in: prints a link that sets a password, and makes person and estate first where they are not there.
 * For whoever runs the server; what it prints is a key for an hour.
 */
const usage = `npm run owner -- --email you@example.org [--name "Your Name" --estate "Your Estate" [--time-zone Europe/Lisbon] [--language en|es|fr|it|pt]]`;

function readArguments(args: readonly string[]) {
  const { values } = parseArgs({
    args: [...args],
    options: { email: { type: 'string' }, name: { type: 'string' }, estate: { type: 'string' }, 'time-zone': { type: 'string' }, language: { type: 'string' } },
  });
  return values;
}

const config = readConfig();
const knex = openDatabase(config.databaseUrl, 2);
try {
  const given = readArguments(process.argv.slice(2));
  const { email } = resetRequest.parse({ email: given.email ?? '' });
  const timeZone = given['time-zone'] ?? Intl.DateTimeFormat().resolvedOptions().timeZone;
  const now = new Date();
  const made = await makeOwner({ email, name: given.name?.trim() || null, estate: given.estate ? { name: given.estate, timeZone, ...(given.language ? { languages: [given.language as 'en'] } : {}) } : null }, now);
  const token = await linkFor(email, now);
  if (made.madeEstate) process.stdout.write(`The estate ${given.estate!} is there, with ${email} as its owner.\n`);
  process.stdout.write(`This link sets the password of ${email}. It works once, within an hour:\n${config.publicUrl || `http://localhost:${config.port}`}/reset/${token}\n`);
} catch (error) {
  const words = error instanceof ZodError ? error.issues.map(({ message }) => message).join(' ') : error instanceof ExpectedError || (error as { code?: string }).code?.startsWith('ERR_PARSE_ARGS') ? (error as Error).message : null;
  if (words === null) throw error;
  process.stderr.write(`${words}\n${usage}\n`);
  process.exitCode = 1;
} finally {
  await knex.destroy();
}
