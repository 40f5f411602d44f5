interface DayWork {
  readonly onDate: string;
  /** Place among the blocks of its day, where they were sent in an order. */
  readonly dayPlace?: number | null;
}

/**
 * Work as it is to be done: today's first, then what comes, nearest first; what is late stands last, newest first, marked
 * as late and not in the way. Blocks of one day keep the order they were sent in. Days are yyyy-mm-dd at the estate.
 */
export function inDayOrder<T extends DayWork>(work: readonly T[], today: string): T[] {
  const group = ({ onDate }: T) => (onDate === today ? 0 : onDate > today ? 1 : 2);
  return [...work].sort((a, b) => group(a) - group(b) || (group(a) === 2 ? b.onDate.localeCompare(a.onDate) : a.onDate.localeCompare(b.onDate)) || (a.dayPlace ?? Infinity) - (b.dayPlace ?? Infinity) || 0);
}
