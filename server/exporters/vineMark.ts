/** A vine as files name it in a few letters: row and vine, or its place number where there are no rows. */
export const vineMark = ({ rowLabel, vineNumber, place }: { rowLabel: string; vineNumber: number; place?: readonly [number, number] | undefined }): string => (place ? `${rowLabel}-${vineNumber}` : `R${rowLabel} V${vineNumber}`);
