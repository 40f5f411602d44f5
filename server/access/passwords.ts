import { hash, verify } from '@node-rs/argon2';
import { createHash, randomBytes } from 'node:crypto';

// Argon2id (RFC 9106) at the least cost that OWASP's password storage cheat sheet recommends: 19 MiB, 2 passes, 1 lane.
const cost = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export function hashPassword(password: string): Promise<string> {
  return hash(password, cost);
}

let decoy: Promise<string> | null = null;

/** Checks a password. Without a stored hash it spends the same time, so that unknown addresses cannot be told apart. */
export async function passwordMatches(stored: string | null, password: string): Promise<boolean> {
  decoy ??= hashPassword(randomBytes(18).toString('hex'));
  const matches = await verify(stored ?? (await decoy), password).catch(() => false);
  return stored !== null && matches;
}

/** A secret for a link, and the only form of it that is stored. */
export function newToken(): { token: string; tokenHash: string } {
  const token = randomBytes(32).toString('base64url');
  return { token, tokenHash: hashToken(token) };
}

export function hashToken(token: string): string {
  return createHash('sha256').update(token).digest('hex');
}
