/** Caps for a laboratory's table: far above any delivery of bags, far below what would hurt the machine. */
export const labLimits = {
  bytes: 8_000_000,
  rows: 5000,
  /** Of a table of readings of earlier visits: seasons of a whole estate. */
  earlierRows: 20_000,
  columns: 200,
  sheets: 30,
  /** All parts of a workbook unpacked. */
  unpackedBytes: 60_000_000,
} as const;
