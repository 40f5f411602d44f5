/** What of a restriction decides whether a walk may begin. */
export interface EntryRule {
  readonly rowIds: readonly string[] | null;
  readonly startsAt: string;
  readonly endsAt: string;
  readonly lifted: unknown;
}

/**
 * Restrictions that forbid entering these rows at this time, the one that ends last first: the longest of several applies.
 * None found never means that it is safe to enter: only that none is recorded.
 */
export function restrictionsAt<Rule extends EntryRule>(rules: readonly Rule[], visit: { readonly at: string; readonly rowIds: readonly string[] }): Rule[] {
  const at = Date.parse(visit.at);
  const here = rules.filter(({ lifted, startsAt, endsAt, rowIds }) =>
    lifted === null && Date.parse(startsAt) <= at && at < Date.parse(endsAt) && (rowIds === null || rowIds.some((row) => visit.rowIds.includes(row))));
  return here.sort((a, b) => Date.parse(b.endsAt) - Date.parse(a.endsAt));
}
