import type { ParsedTable } from './parseTable.ts';

/** A point as databases and map programs write it in a cell, with heights or measures left out. */
const point = /^(?:srid=(\d+);)?\s*point\s*z?m?\s*\(\s*([-+\d.e]+)\s+([-+\d.e]+)(?:\s+[-+\d.e]+){0,2}\s*\)$/i;

/** Cells of a column that must be points for it to hold the places; the rest is set aside as rows without a position. */
const mostly = 0.9;

/** The table with the places of its WKT column in columns of their own; the same table where no column holds points. */
export function withWktPoints(table: ParsedTable): ParsedTable {
  const at = table.names.findIndex((_, column) => holdsPoints(table, column));
  if (at < 0) return table;
  const inDegrees = table.rows.some((row) => point.exec(row[at] ?? '')?.[1] === '4326');
  const [x, y] = inDegrees ? ['longitude', 'latitude'] : ['X', 'Y'];
  const rows = table.rows.map((row) => {
    const found = point.exec(row[at] ?? '');
    return [...Array.from(table.names, (_, column) => (column === at ? (found?.[2] ?? '') : (row[column] ?? ''))), found?.[3] ?? ''];
  });
  return { ...table, names: [...table.names.map((name, column) => (column === at ? x : name)), y], rows };
}

function holdsPoints({ rows }: ParsedTable, column: number): boolean {
  const cells = rows.slice(0, 200).map((row) => row[column] ?? '').filter((cell) => cell !== '');
  return cells.length > 0 && cells.filter((cell) => point.test(cell)).length >= mostly * cells.length;
}
