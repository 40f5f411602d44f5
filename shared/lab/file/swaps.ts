import { unitsOf } from '../units.ts';
import { cellText, isBlank } from './cells.ts';
import type { LabMeasure } from './labFile.ts';
import type { LabTable } from './layout.ts';
import { isPlausible } from './plausible.ts';
import type { Asking } from './questions.ts';
import { roughNumber } from './shifts.ts';
import { roleOfTitle } from './titles.ts';

const mostly = 0.8;

/**
 * Two columns under each other's titles: figures of one that cannot be what its title says, while each column fits the
 * other's title. Asked, because one of the two may look right where it stands (acidity of 3.41 beside a pH of 6.2).
 */
export function mendSwap(table: LabTable, measures: readonly LabMeasure[], asking: Asking): LabTable {
  const columns = table.titles.flatMap((title, column) => {
    const role = roleOfTitle(title, measures);
    return role.kind === 'measure' && column !== table.codeColumn ? [{ column, title, measure: measures.find(({ code }) => code === role.measure)! }] : [];
  });
  const fits = (column: number, measure: LabMeasure) => {
    const cells = table.rows.map(({ cells: row }) => row[column]).filter((cell) => !isBlank(cell));
    const units = unitsOf(measure.code).map(({ id }) => id);
    const good = cells.filter((cell) => (units.length === 0 ? [measure.unit] : units).some((unit) => isPlausible(measure, unit, roughNumber(cell))));
    return cells.length === 0 ? null : good.length / cells.length;
  };
  for (const [at, one] of columns.entries()) {
    for (const other of columns.slice(at + 1)) {
      if (one.measure.code === other.measure.code) continue;
      const [oneHere, otherHere, oneThere, otherThere] = [fits(one.column, one.measure), fits(other.column, other.measure), fits(one.column, other.measure), fits(other.column, one.measure)];
      if (oneHere === null || otherHere === null || Math.min(oneHere, otherHere) > 1 - mostly || Math.min(oneThere ?? 0, otherThere ?? 0) < mostly) continue;
      const example = table.rows.find(({ cells }) => !isBlank(cells[one.column]) && !isBlank(cells[other.column]));
      const answer = asking.ask('swapped', {
        code: 'swapped',
        params: {
          one: one.title,
          other: other.title,
          oneFound: cellText(example?.cells[one.column]),
          otherFound: cellText(example?.cells[other.column]),
        },
        choices: ['swap', 'stay'],
        suggestion: 'swap',
      });
      if (answer === 'stay') return table;
      // Until it is answered nothing is read of columns that may be each other's.
      if (answer === null) return { ...table, rows: [] };
      const titles = table.titles.map((title, column) => (column === one.column ? other.title : column === other.column ? one.title : title));
      return { ...table, titles };
    }
  }
  return table;
}
