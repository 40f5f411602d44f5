/** Parts of a season in their order, as the season line shows them. */
export const phaseIds = ['dormant', 'bloom', 'lagPhase', 'veraison', 'pick', 'review'] as const;
export type PhaseId = (typeof phaseIds)[number];
export type Phases = Record<string, [string, string]>;

const dayMs = 86_400_000;

/**
 * First and last day of each phase, counted in days from a season that begins the month after the pick. Common practice
 * for a middling variety in a temperate climate, from memory; an estate moves them to its own years.
 */
const usualDays: Record<PhaseId, readonly [number, number]> = { dormant: [0, 118], bloom: [172, 190], lagPhase: [219, 235], veraison: [243, 262], pick: [282, 318], review: [330, 364] };

/** Phases that a new season starts with. `startingPhases('2026-12-01').bloom` is ['2027-05-22', '2027-06-09']. */
export function startingPhases(startsOn: string): Phases {
  const on = (days: number) => new Date(Date.parse(startsOn) + days * dayMs).toISOString().slice(0, 10);
  return Object.fromEntries(phaseIds.map((id) => [id, [on(usualDays[id][0]), on(usualDays[id][1])]]));
}

/** What is wrong with phases in a season, or null: each must end after it begins, lie in the season and follow the one before. */
export function phaseProblem(phases: Phases, season: { startsOn: string; endsOn: string }): { phase: PhaseId; problem: 'reversed' | 'outside' | 'overlaps' } | null {
  let before = '';
  for (const phase of phaseIds) {
    const [from, to] = phases[phase] ?? [];
    if (from === undefined || to === undefined) continue;
    if (to < from) return { phase, problem: 'reversed' };
    if (from < season.startsOn || to > season.endsOn) return { phase, problem: 'outside' };
    if (from <= before) return { phase, problem: 'overlaps' };
    before = to;
  }
  return null;
}
