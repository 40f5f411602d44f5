import type { NextFunction, Request, RequestHandler, Response } from 'express';
import { z } from 'zod';
import type { Permission, Reach } from '../../shared/catalog/permissions.ts';
import type { Role } from '../../shared/catalog/roles.ts';
import { Missing, NotSignedIn } from '../errors.ts';
import { Membership } from '../models/Membership.ts';
import { requireReach, type Access } from './access.ts';

declare global {
  // Express's own way to add a field to its request type.
  // eslint-disable-next-line @typescript-eslint/no-namespace
  namespace Express {
    interface User {
      id: string;
    }
    interface Request {
      access?: Access;
    }
  }
}

/** The signed-in person's id. */
export function signedIn(request: Request): string {
  if (!request.user) throw new NotSignedIn();
  return request.user.id;
}

/** The one door to an estate: its address answers 404 to everybody without an open membership in it. */
export async function estateGuard(request: Request, _response: Response, next: NextFunction): Promise<void> {
  const personId = signedIn(request);
  const estateId = z.uuid().safeParse(request.params.estateId);
  if (!estateId.success) throw new Missing();
  const roles = await openRoles(estateId.data, personId);
  if (roles.length === 0) throw new Missing();
  request.access = { estateId: estateId.data, personId, roles };
  next();
}

/** Roles in force today: begun, not ended, not past their last day. */
async function openRoles(estateId: string, personId: string): Promise<Role[]> {
  const rows = await Membership.query()
    .where({ estateId, personId })
    .whereNull('endedAt')
    .whereRaw('starts_on <= current_date and (ends_on is null or ends_on >= current_date)')
    .select('role');
  return rows.map((row) => row.role);
}

export function accessOf(request: Request): Access {
  if (!request.access) throw new Missing();
  return request.access;
}

/** Route guard: refuses with 403 unless the roles reach so far. */
export function allow(action: Permission, atLeast: Reach = 'do'): RequestHandler {
  return (request, _response, next) => {
    requireReach(accessOf(request), action, atLeast);
    next();
  };
}

/** A path parameter that must be an id; anything else is simply not found. */
export function idParam(request: Request, name: string): string {
  const parsed = z.uuid().safeParse(request.params[name]);
  if (!parsed.success) throw new Missing();
  return parsed.data;
}
