interface NamedRow {
  readonly id: string;
  readonly label: string;
}

/**
 * Rows as people list them: single labels and spans, in the order in which the rows stand. An empty list is null, the
 * whole block. Example: "3-5, 9" → the ids of rows 3, 4, 5 and 9; a label that no row has is answered as `unknown`.
 */
export function rowsOfList(text: string, rows: readonly NamedRow[]): { rowIds: string[] | null } | { unknown: string } {
  const parts = text.split(/[,;\n]+/).map((part) => part.trim()).filter((part) => part !== '');
  if (parts.length === 0) return { rowIds: null };
  const placeOf = (label: string) => rows.findIndex((row) => row.label.toLowerCase() === label.trim().toLowerCase());
  const chosen = new Set<number>();
  for (const part of parts) {
    // A label may hold a hyphen itself; only what is no label is read as a span.
    const ends = placeOf(part) >= 0 ? [part] : part.split(/\s*[-–—]\s*/);
    const places = ends.map(placeOf);
    const missing = ends.length > 2 ? part : ends[places.indexOf(-1)];
    if (missing !== undefined) return { unknown: missing };
    for (let place = Math.min(...places); place <= Math.max(...places); place++) chosen.add(place);
  }
  return { rowIds: [...chosen].sort((a, b) => a - b).map((place) => rows[place]!.id) };
}
