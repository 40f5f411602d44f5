/** Caps that keep a hostile or broken file from taking the machine with it. Bytes unless said otherwise. */
export const limits = {
  /** One decoded tile or strip. */
  rasterBlockBytes: 192 * 2 ** 20,
  /** Pixels decoded in one pass over the blocks. */
  rasterPixels: 2e9,
  /** Offsets and sizes of tiles or strips, per image. */
  rasterBlocks: 2e7,
  tiffDirectories: 64,
  tiffTagsPerDirectory: 4096,
  /** A tag that is not the list of tiles. */
  tiffTagBytes: 4 * 2 ** 20,
  bands: 1024,

  archiveEntries: 2000,
  archiveBytes: 512 * 2 ** 20,
  archiveEntryBytes: 256 * 2 ** 20,
  /** Unpacked size over packed size; real shapefiles reach about 30. */
  archiveRatio: 200,
  /** Below this unpacked size a high ratio is harmless. */
  archiveRatioFromBytes: 4 * 2 ** 20,

  /** A database is held in memory twice while it is read. */
  databaseBytes: 160 * 2 ** 20,

  textBytes: 256 * 2 ** 20,
  jsonDepth: 64,
  xmlDepth: 200,
  features: 100_000,
  vertices: 3_000_000,
  fields: 512,
  rows: 2_000_000,
  columns: 1000,
} as const;
