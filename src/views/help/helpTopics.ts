import type { RouteName } from '../../router/routeNames.ts';

/** Cards of the help, in the order of the season's work. */
export const helpTopics = ['today', 'estate', 'block', 'imports', 'earlier', 'zoning', 'editor', 'plan', 'rounds', 'field', 'restrictions', 'lab', 'ripeness', 'lots', 'notices', 'review', 'people', 'history', 'account'] as const;
export type HelpTopic = (typeof helpTopics)[number];

/** The card of each screen; a screen without a row opens the first card. */
const topics: Partial<Record<RouteName, HelpTopic>> = {
  today: 'today', estate: 'estate', blockNew: 'block', block: 'block', blockEdit: 'block', layer: 'imports', imports: 'imports', earlierReadings: 'earlier', zones: 'zoning', zoningBench: 'zoning', zoning: 'zoning', zoneEditor: 'editor',
  sampling: 'rounds', plan: 'plan', planNew: 'plan', targets: 'rounds', sheets: 'rounds', restrictions: 'restrictions', lab: 'lab', ripeness: 'ripeness', blockRipeness: 'ripeness', lots: 'lots', lot: 'lots', pickBoard: 'notices',
  review: 'review', people: 'people', mail: 'people', settings: 'people', estateNew: 'people', history: 'history', account: 'account', fieldWork: 'field', fieldWalk: 'field', fieldBag: 'field', fieldOutbox: 'field', fieldConflicts: 'field', conflicts: 'field', paper: 'rounds', measures: 'plan',
};

export function topicOf(route: unknown): HelpTopic {
  return topics[route as RouteName] ?? 'today';
}

/** Terms that the screens use and a newcomer may not. */
export const helpWords = [
  'block', 'row', 'vine', 'headland', 'layer', 'vigour', 'conductivity', 'zone', 'verdict', 'doubt', 'draft', 'measure', 'margin', 'confidence', 'range', 'spread', 'quota', 'target', 'reserve', 'round', 'reading', 'outlier', 'lagPhase', 'growthFactor', 'veraison', 'brix', 'ta', 'alcohol', 'lot', 'notice', 'ticket', 'restriction', 'received',
] as const;
