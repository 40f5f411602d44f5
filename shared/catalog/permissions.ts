import type { Role } from './roles.ts';

/**
 * How far an action reaches, weakest to strongest: `read` only, `own` or assigned things only,
 * `propose` what somebody else confirms, `do`.
 */
export type Reach = 'read' | 'own' | 'propose' | 'do';

type Row = Partial<Record<Role, Reach>>;

const everybody: Row = { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do', winemaker: 'do', crew: 'do', lab: 'do' };
const planners: Row = { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do' };

/** One row an action; a role that is missing from the row may not do it at all. Enforced on the server, mirrored by menus. */
export const permissions = {
  'estate.create': { owner: 'do' },
  'estate.see': { ...everybody, guest: 'read' },
  'estate.settings': { owner: 'do', admin: 'do', agronomist: 'read', manager: 'read', winemaker: 'read', lab: 'read' },
  'people.see': { owner: 'do', admin: 'do', manager: 'read' },
  'people.manage': { owner: 'do', admin: 'do', manager: 'propose' },
  'estate.backup': { owner: 'do', admin: 'do' },
  'audit.see': { owner: 'do', admin: 'do', agronomist: 'read', manager: 'read', winemaker: 'read' },
  'mail.see': { owner: 'do', admin: 'do' },
  'blocks.edit': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'propose' },
  'rows.renumber': planners,
  'census.edit': { ...planners, crew: 'propose' },
  'layers.import': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'read', winemaker: 'read' },
  'layers.override': planners,
  'zoning.run': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'propose' },
  'zones.edit': { owner: 'do', admin: 'do', agronomist: 'propose', manager: 'do', winemaker: 'propose' },
  'zones.publish': { owner: 'do', admin: 'do', manager: 'do' },
  'zones.restore': { owner: 'do', admin: 'do', agronomist: 'propose', manager: 'do' },
  'plans.margins': { ...planners, winemaker: 'propose' },
  'plans.draw': planners,
  'rounds.assign': { owner: 'do', admin: 'do', agronomist: 'propose', manager: 'do' },
  'readings.record': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do', winemaker: 'do', crew: 'own', lab: 'own' },
  'readings.correct': planners,
  'readings.import': { ...planners, winemaker: 'do' },
  'conflicts.settle': { ...planners, crew: 'own', lab: 'own' },
  'sheets.print': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do', winemaker: 'do', crew: 'own', lab: 'do' },
  'lab.enter': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'read', winemaker: 'propose', lab: 'do' },
  'results.check': { owner: 'do', admin: 'do', agronomist: 'do', winemaker: 'do', lab: 'do' },
  'labels.settle': { ...planners, winemaker: 'do', lab: 'do' },
  'results.see': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do', winemaker: 'do', lab: 'read', guest: 'read' },
  'outliers.exclude': { owner: 'do', admin: 'do', agronomist: 'do', winemaker: 'do', lab: 'propose' },
  'restrictions.set': planners,
  'restrictions.lift': { owner: 'do', manager: 'do' },
  'restrictions.see': { ...everybody, guest: 'read' },
  'weather.enter': { ...planners, winemaker: 'do', lab: 'do' },
  'lots.see': { owner: 'do', admin: 'do', agronomist: 'read', manager: 'read', winemaker: 'do' },
  'lots.build': { owner: 'do', admin: 'do', agronomist: 'read', manager: 'propose', winemaker: 'do' },
  'lots.confirm': { owner: 'do', manager: 'propose', winemaker: 'do' },
  'notices.send': { owner: 'do', manager: 'do', winemaker: 'do' },
  'notices.acknowledge': everybody,
  'tickets.enter': { owner: 'do', admin: 'do', manager: 'do', winemaker: 'do' },
  'factors.switch': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do', winemaker: 'do' },
  'review.see': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do', winemaker: 'do', guest: 'read' },
  'exports.make': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do', winemaker: 'do', crew: 'own', lab: 'own', guest: 'propose' },
  'names.see': { owner: 'do', admin: 'do', agronomist: 'do', manager: 'do', winemaker: 'read', crew: 'own', lab: 'own' },
} as const satisfies Record<string, Row>;

export type Permission = keyof typeof permissions;

const strength: Record<Reach, number> = { read: 1, own: 2, propose: 3, do: 4 };

/** Strongest reach that any of the roles gives for the action, or null when none gives any. */
export function reachOf(rolesHeld: readonly Role[], action: Permission): Reach | null {
  const row: Row = permissions[action];
  let best: Reach | null = null;
  for (const role of rolesHeld) {
    const reach = row[role];
    if (reach && (best === null || strength[reach] > strength[best])) best = reach;
  }
  return best;
}

/** True when the roles reach at least as far as asked. */
export function may(rolesHeld: readonly Role[], action: Permission, atLeast: Reach = 'do'): boolean {
  const reach = reachOf(rolesHeld, action);
  return reach !== null && strength[reach] >= strength[atLeast];
}
