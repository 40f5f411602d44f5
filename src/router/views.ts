import type { Component } from 'vue';
import type { RouteName } from './routeNames.ts';

type LazyView = () => Promise<{ default: Component }>;

/** The view of each place, loaded when it is first opened. A place without a line here does not exist yet and is not linked to. */
export const views: Partial<Record<RouteName, LazyView>> = {
  signIn: () => import('../views/door/SignInView.vue'),
  join: () => import('../views/door/JoinView.vue'),
  home: () => import('../views/door/HomeView.vue'),
  estate: () => import('../views/estate/EstateView.vue'),
  blockNew: () => import('../views/blocks/BlockNewView.vue'),
  block: () => import('../views/blocks/BlockBookView.vue'),
  blockEdit: () => import('../views/blocks/BlockEditView.vue'),
  layer: () => import('../views/blocks/LayerCheckView.vue'),
  imports: () => import('../views/imports/ImportDeskView.vue'),
  ripeness: () => import('../views/ripeness/RipenessView.vue'),
  blockRipeness: () => import('../views/ripeness/RipenessView.vue'),
  lots: () => import('../views/lots/LotsView.vue'),
  lot: () => import('../views/lots/LotsView.vue'),
  pickBoard: () => import('../views/lots/PickBoardView.vue'),
  review: () => import('../views/review/ReviewView.vue'),
  people: () => import('../views/people/PeopleView.vue'),
  mail: () => import('../views/people/MailView.vue'),
  settings: () => import('../views/people/SettingsView.vue'),
  history: () => import('../views/people/HistoryView.vue'),
  restrictions: () => import('../views/safety/RestrictionsView.vue'),
  sampling: () => import('../views/sampling/SamplingView.vue'),
  planNew: () => import('../views/sampling/PlanView.vue'),
  plan: () => import('../views/sampling/PlanView.vue'),
  targets: () => import('../views/sampling/TargetsView.vue'),
  fieldWork: () => import('../views/field/FieldWorkView.vue'),
  fieldWalk: () => import('../views/field/FieldWalkView.vue'),
  fieldOutbox: () => import('../views/field/FieldOutboxView.vue'),
  zones: () => import('../views/zones/ZonesView.vue'),
  zoningBench: () => import('../views/zones/ZoningBenchView.vue'),
  zoning: () => import('../views/zones/ZoningBenchView.vue'),
  zoneEditor: () => import('../views/zones/ZoneEditorView.vue'),
  notFound: () => import('../views/door/NotFoundView.vue'),
};
