import highsLoader from 'highs';
import { handOutTanks, lotChoices, type ChoiceRules, type ChoiceTank, type ChoiceZone, type LotChoice } from '../../shared/cellar/lotChoices.ts';
import { greedyChoice, lotProgramme, programmeCost } from '../../shared/cellar/lotProgramme.ts';

export interface SuggestInput {
  zones: ChoiceZone[];
  tanks: ChoiceTank[];
  rules: ChoiceRules;
  limitSeconds: number;
}

export interface SuggestAnswer {
  lots: LotChoice[];
  /** All groupings were looked at, and the best set of them was proved to be so. */
  provedBest: boolean;
  groupings: number;
}

/** Finds the best lots with HiGHS, within the time given. Runs in a compute thread. */
export async function suggestLots({ zones, tanks, rules, limitSeconds }: SuggestInput): Promise<SuggestAnswer> {
  const { choices, complete } = lotChoices(zones, tanks, rules);
  if (choices.length === 0) return { lots: [], provedBest: complete, groupings: 0 };
  const highs = await highsLoader();
  const answer = highs.solve(lotProgramme(zones, tanks, choices), { time_limit: limitSeconds, output_flag: false, mip_rel_gap: 0 });
  const columns = answer.Columns as Record<string, { Primal?: number }>;
  const solved = choices.filter((_, k) => (columns[`y${k}`]?.Primal ?? 0) > 0.5);
  // Cut off by its time the solver may hold worse lots than the plainest way finds.
  const [lots] = [solved, greedyChoice(tanks, choices)].sort((a, b) => programmeCost(zones, a) - programmeCost(zones, b));
  return { lots: handOutTanks(lots!, tanks), provedBest: complete && answer.Status === 'Optimal', groupings: choices.length };
}
