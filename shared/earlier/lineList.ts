const shownLines = 12;

/** Line numbers as a person reads them: "4, 9, 12", the first twelve of many. */
export function lineList(lines: readonly number[]): string {
  const different = [...new Set(lines)].sort((a, b) => a - b);
  return `${different.slice(0, shownLines).join(', ')}${different.length > shownLines ? ' …' : ''}`;
}
