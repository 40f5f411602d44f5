import type { Permission, Reach } from '../../shared/catalog/permissions.ts';

/** Which frame stands around a view: the office (masthead, season line), the field (phone), the door (nothing). */
export type Frame = 'office' | 'field' | 'door';

export interface RoutePlace {
  readonly path: string;
  readonly frame: Frame;
  /** Needed to see the view at all; the server checks again. */
  readonly needs?: readonly [Permission, Reach];
  /** Entry of the masthead that is lit. */
  readonly under?: RouteName;
}

/** Every place of the product: a wrong name does not compile. Estate places carry the estate's id, so that links in mails hold. */
export const routePlaces = {
  signIn: { path: '/sign-in', frame: 'door' },
  crewDoor: { path: '/crew', frame: 'door' },
  join: { path: '/join/:token', frame: 'door' },
  forgotten: { path: '/forgotten', frame: 'door' },
  reset: { path: '/reset/:token', frame: 'door' },
  noticeState: { path: '/n/:code', frame: 'door' },
  home: { path: '/', frame: 'door' },
  today: { path: '/e/:estateId/today', frame: 'office' },
  estate: { path: '/e/:estateId/estate', frame: 'office' },
  blockNew: { path: '/e/:estateId/blocks/new', frame: 'office', needs: ['blocks.edit', 'propose'], under: 'estate' },
  block: { path: '/e/:estateId/blocks/:blockId', frame: 'office', under: 'estate' },
  blockEdit: { path: '/e/:estateId/blocks/:blockId/facts', frame: 'office', needs: ['blocks.edit', 'propose'], under: 'estate' },
  layer: { path: '/e/:estateId/blocks/:blockId/layers/:layerId', frame: 'office', under: 'estate' },
  imports: { path: '/e/:estateId/imports', frame: 'office', needs: ['layers.import', 'read'] },
  earlierReadings: { path: '/e/:estateId/earlier-readings', frame: 'office', needs: ['readings.import', 'do'], under: 'imports' },
  zones: { path: '/e/:estateId/zones', frame: 'office' },
  zoningBench: { path: '/e/:estateId/blocks/:blockId/zoning', frame: 'office', under: 'zones' },
  zoning: { path: '/e/:estateId/blocks/:blockId/zoning/:zoningId', frame: 'office', under: 'zones' },
  zoneEditor: { path: '/e/:estateId/zonings/:zoningId/edit', frame: 'office', needs: ['zones.edit', 'propose'], under: 'zones' },
  sampling: { path: '/e/:estateId/sampling', frame: 'office', needs: ['plans.margins', 'propose'] },
  plan: { path: '/e/:estateId/plans/:planId', frame: 'office', needs: ['plans.margins', 'propose'], under: 'sampling' },
  planNew: { path: '/e/:estateId/zonings/:zoningId/plan', frame: 'office', needs: ['plans.margins', 'propose'], under: 'sampling' },
  targets: { path: '/e/:estateId/plans/:planId/targets', frame: 'office', needs: ['plans.margins', 'propose'], under: 'sampling' },
  sheets: { path: '/e/:estateId/rounds/:roundId/sheet', frame: 'office', needs: ['sheets.print', 'own'], under: 'sampling' },
  paper: { path: '/e/:estateId/rounds/:roundId/paper', frame: 'office', needs: ['readings.record', 'do'], under: 'sampling' },
  photos: { path: '/e/:estateId/photos', frame: 'office', needs: ['readings.record', 'own'], under: 'sampling' },
  conflicts: { path: '/e/:estateId/conflicts', frame: 'office', needs: ['conflicts.settle', 'own'], under: 'sampling' },
  measures: { path: '/e/:estateId/measures', frame: 'office', needs: ['plans.margins', 'propose'], under: 'sampling' },
  restrictions: { path: '/e/:estateId/restrictions', frame: 'office', needs: ['restrictions.see', 'read'], under: 'sampling' },
  lab: { path: '/e/:estateId/lab', frame: 'office', needs: ['lab.enter', 'read'] },
  ripeness: { path: '/e/:estateId/ripeness', frame: 'office', needs: ['results.see', 'read'] },
  blockRipeness: { path: '/e/:estateId/blocks/:blockId/ripeness', frame: 'office', needs: ['results.see', 'read'], under: 'ripeness' },
  weather: { path: '/e/:estateId/weather', frame: 'office', needs: ['results.see', 'read'], under: 'ripeness' },
  lots: { path: '/e/:estateId/lots', frame: 'office', needs: ['lots.see', 'read'] },
  lot: { path: '/e/:estateId/lots/:lotId', frame: 'office', needs: ['lots.see', 'read'], under: 'lots' },
  pickBoard: { path: '/e/:estateId/pick-board', frame: 'office', needs: ['notices.acknowledge', 'own'], under: 'lots' },
  review: { path: '/e/:estateId/review', frame: 'office', needs: ['review.see', 'read'] },
  people: { path: '/e/:estateId/people', frame: 'office', needs: ['people.see', 'read'] },
  mail: { path: '/e/:estateId/mail', frame: 'office', needs: ['mail.see', 'read'], under: 'people' },
  settings: { path: '/e/:estateId/settings', frame: 'office', needs: ['estate.settings', 'read'], under: 'people' },
  history: { path: '/e/:estateId/history', frame: 'office', needs: ['audit.see', 'read'] },
  help: { path: '/e/:estateId/help', frame: 'office' },
  account: { path: '/account', frame: 'office' },
  estateNew: { path: '/estates/new', frame: 'office' },
  fieldWork: { path: '/e/:estateId/field', frame: 'field', needs: ['readings.record', 'own'] },
  fieldWalk: { path: '/e/:estateId/field/rounds/:roundId', frame: 'field', needs: ['readings.record', 'own'] },
  fieldBag: { path: '/e/:estateId/field/rounds/:roundId/bag', frame: 'field', needs: ['readings.record', 'own'] },
  fieldConflicts: { path: '/e/:estateId/field/conflicts', frame: 'field', needs: ['conflicts.settle', 'own'] },
  fieldOutbox: { path: '/e/:estateId/field/outbox', frame: 'field', needs: ['readings.record', 'own'] },
  notFound: { path: '/:rest(.*)*', frame: 'door' },
} as const satisfies Record<string, { path: string; frame: Frame; needs?: readonly [Permission, Reach]; under?: string }>;

export type RouteName = keyof typeof routePlaces;

/** Entries of the masthead in the order of the season's work; those without a view or without the right are left out. */
export const navigation = ['today', 'estate', 'imports', 'zones', 'sampling', 'lab', 'ripeness', 'lots', 'review', 'people', 'history'] as const satisfies readonly RouteName[];
export type NavigationName = (typeof navigation)[number];
