/** What of a restriction decides whether a walk may begin. */
export interface EntryRule {
  readonly rowIds: readonly string[] | null;
  readonly startsAt: string;
  readonly endsAt: string;
  readonly lifted: unknown;
}

/**
 * Restrictions in force by a phone whose clock may be wrong: by its own time or by the server's, as far as they have met.
 * Whichever of the two forbids entering, forbids it.
 */
export function restrictionsNow<Rule extends EntryRule>(rules: readonly Rule[], visit: { readonly now: Date; readonly clockOffMs: number; readonly rowIds: readonly string[] }): Rule[] {
  const clocks = [visit.now, new Date(visit.now.getTime() - visit.clockOffMs)];
  const found = clocks.flatMap((clock) => restrictionsAt(rules, { at: clock.toISOString(), rowIds: visit.rowIds }));
  return [...new Set(found)].sort((a, b) => Date.parse(b.endsAt) - Date.parse(a.endsAt));
}

/** Restrictions that forbid entering these rows at some time between, for a paper that is carried all day; the one that ends last first. */
export function restrictionsWithin<Rule extends EntryRule>(rules: readonly Rule[], visit: { readonly from: Date; readonly to: Date; readonly rowIds: readonly string[] }): Rule[] {
  return inForce(rules, visit.rowIds, ({ startsAt, endsAt }) => Date.parse(startsAt) < visit.to.getTime() && Date.parse(endsAt) > visit.from.getTime());
}

/**
 * Restrictions that forbid entering these rows at this time, the one that ends last first: the longest of several applies.
 * None found never means that it is safe to enter: only that none is recorded.
 */
export function restrictionsAt<Rule extends EntryRule>(rules: readonly Rule[], visit: { readonly at: string; readonly rowIds: readonly string[] }): Rule[] {
  const at = Date.parse(visit.at);
  return inForce(rules, visit.rowIds, ({ startsAt, endsAt }) => Date.parse(startsAt) <= at && at < Date.parse(endsAt));
}

function inForce<Rule extends EntryRule>(rules: readonly Rule[], rowsWalked: readonly string[], isThen: (rule: Rule) => boolean): Rule[] {
  const here = rules.filter((rule) => rule.lifted === null && isThen(rule) && (rule.rowIds === null || rule.rowIds.some((row) => rowsWalked.includes(row))));
  return here.sort((a, b) => Date.parse(b.endsAt) - Date.parse(a.endsAt));
}
