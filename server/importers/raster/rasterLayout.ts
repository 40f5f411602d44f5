import type { ByteSource } from '../byteSource.ts';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';
import { compressions } from './compressions.ts';
import { readTagNumbers, type TiffDirectory } from './tiffStructure.ts';

/** How the pixels of one picture of a TIFF lie in the file. A block is a tile or a strip. */
export interface RasterLayout {
  readonly width: number;
  readonly height: number;
  readonly blockWidth: number;
  readonly blockHeight: number;
  readonly blocksAcross: number;
  readonly blocksDown: number;
  readonly samples: number;
  /** Bands lie in blocks of their own (PlanarConfiguration 2). */
  readonly separate: boolean;
  readonly bits: number;
  readonly format: 'uint' | 'int' | 'float';
  readonly compression: number;
  readonly compressionName: string;
  readonly predictor: number;
  readonly littleEndian: boolean;
  readonly offsets: Float64Array;
  readonly byteCounts: Float64Array;
}

/** Uncompressed strips above this are read in slices. */
const SLICE_BYTES = 2 * 2 ** 20;

/** Tag numbers of TIFF 6.0 used here. */
const tag = {
  width: 256,
  height: 257,
  bits: 258,
  compression: 259,
  fillOrder: 266,
  stripOffsets: 273,
  samples: 277,
  rowsPerStrip: 278,
  stripBytes: 279,
  planar: 284,
  predictor: 317,
  tileWidth: 322,
  tileHeight: 323,
  tileOffsets: 324,
  tileBytes: 325,
  format: 339,
} as const;

/** Reads and checks the layout. Throws `unsupported-encoding` by name, `damaged` or `too-large`. */
export function readLayout(source: ByteSource, directory: TiffDirectory, littleEndian: boolean): RasterLayout {
  const numbers = (id: number): Float64Array | null => {
    const entry = directory.tags.get(id);
    return entry === undefined ? null : readTagNumbers(source, entry, littleEndian);
  };
  const number = (id: number, fallback: number): number => numbers(id)?.[0] ?? fallback;

  const width = number(tag.width, 0);
  const height = number(tag.height, 0);
  if (width < 1 || height < 1 || width > 2 ** 31 || height > 2 ** 31) throw damaged(`It claims a picture of ${width} × ${height} pixels.`);
  const samples = number(tag.samples, 1);
  if (samples < 1 || samples > limits.bands) throw damaged(`It claims ${samples} bands.`);

  const compression = number(tag.compression, 1);
  const compressionName = checkCompression(compression);
  const { bits, format } = readSampleKind(numbers(tag.bits), numbers(tag.format));
  const predictor = checkPredictor(number(tag.predictor, 1), bits, format);
  if (number(tag.fillOrder, 1) === 2) throw unsupported('Its bits are stored in reverse order (FillOrder 2).');
  const planar = number(tag.planar, 1);
  if (planar !== 1 && planar !== 2) throw damaged(`Its band order code is ${planar}.`);

  const tiled = directory.tags.has(tag.tileOffsets);
  const blockWidth = tiled ? number(tag.tileWidth, 0) : width;
  const blockHeight = tiled ? number(tag.tileHeight, 0) : Math.min(height, Math.max(1, number(tag.rowsPerStrip, height)));
  if (blockWidth < 1 || blockHeight < 1) throw damaged('Its tiles have no size.');
  const blocksAcross = Math.ceil(width / blockWidth);
  const blocksDown = Math.ceil(height / blockHeight);
  const separate = planar === 2 && samples > 1;
  const blocks = blocksAcross * blocksDown * (separate ? samples : 1);
  const { offsets, byteCounts } = readBlockTable(numbers, { tiled, blocks, fileSize: source.size });
  const layout: RasterLayout = { width, height, blockWidth, blockHeight, blocksAcross, blocksDown, samples, separate, bits, format, compression, compressionName, predictor, littleEndian, offsets, byteCounts };
  return smallerStrips(layout);
}

/** Bytes of one row of a block as stored: rows are padded to whole bytes. */
export function blockRowBytes(layout: RasterLayout): number {
  return Math.ceil((layout.blockWidth * (layout.separate ? 1 : layout.samples) * layout.bits) / 8);
}

function checkCompression(code: number): string {
  const known = compressions.get(code);
  if (known === undefined) throw unsupported(`Its compression has the unknown number ${code}.`);
  if (known.prepare === null) throw unsupported(`It is compressed as ${known.name}, which is not read because ${known.reason}.`, { why: 'compression', name: known.name });
  return known.name;
}

function readSampleKind(bitsOf: Float64Array | null, formatOf: Float64Array | null): Pick<RasterLayout, 'bits' | 'format'> {
  const bits = bitsOf?.[0] ?? 1;
  if (bitsOf?.some((other) => other !== bits)) throw unsupported(`Its bands have different depths (${[...new Set(bitsOf)].join(', ')} bits).`);
  const code = formatOf?.[0] ?? 1;
  if (formatOf?.some((other) => other !== code)) throw unsupported('Its bands have different number types.');
  if (code === 5 || code === 6) throw unsupported('Its values are complex numbers, as in radar data.', { why: 'complex' });
  const format = ({ 1: 'uint', 2: 'int', 3: 'float', 4: 'uint' } as const)[code];
  if (format === undefined) throw unsupported(`Its number type has the unknown code ${code}.`);
  const known = format === 'float' ? [16, 32, 64] : format === 'int' ? [8, 16, 32, 64] : null;
  if (known !== null ? !known.includes(bits) : !(bits === 64 || (bits >= 1 && bits <= 32))) throw unsupported(`Its values are ${bits}-bit ${format === 'float' ? 'floating-point numbers' : 'whole numbers'}.`);
  return { bits, format };
}

function checkPredictor(predictor: number, bits: number, format: RasterLayout['format']): number {
  const allowed = predictor === 1 || (predictor === 2 && [8, 16, 32, 64].includes(bits)) || (predictor === 3 && format === 'float');
  if (!allowed) throw unsupported(`It uses predictor ${predictor} with ${bits}-bit values.`);
  return predictor;
}

interface TableSize {
  tiled: boolean;
  blocks: number;
  fileSize: number;
}

function readBlockTable(numbers: (id: number) => Float64Array | null, { tiled, blocks, fileSize }: TableSize): Pick<RasterLayout, 'offsets' | 'byteCounts'> {
  const offsets = numbers(tiled ? tag.tileOffsets : tag.stripOffsets);
  if (offsets === null) throw damaged('It does not say where its pixels are.');
  if (blocks > limits.rasterBlocks || offsets.length < blocks) throw damaged(`It needs ${blocks} tiles or strips and lists ${offsets.length}.`);
  const listed = numbers(tiled ? tag.tileBytes : tag.stripBytes);
  if (listed !== null && listed.length >= blocks) return { offsets, byteCounts: listed };
  if (blocks !== 1) throw damaged('It does not say how long its tiles or strips are.');
  // Old writers leave the length out when there is one strip: it then runs to the end of the file.
  return { offsets, byteCounts: Float64Array.of(Math.max(0, fileSize - offsets[0]!)) };
}

/** Uncompressed strips of any height can be read in slices, so that one strip for the whole picture costs no memory. */
function smallerStrips(layout: RasterLayout): RasterLayout {
  const rowBytes = blockRowBytes(layout);
  const size = rowBytes * layout.blockHeight;
  if (layout.compression === 1 && layout.blocksAcross === 1 && size > SLICE_BYTES) return sliceStrips(layout, rowBytes);
  if (size <= limits.rasterBlockBytes) return layout;
  throw new ImportProblem({
    code: 'too-large',
    fact: `One of its tiles or strips holds ${Math.round(size / 2 ** 20)} MB of pixels; ${limits.rasterBlockBytes / 2 ** 20} MB is the most that is read at once.`,
    remedy: 'Export it in tiles of 256 or 512 pixels.',
    params: { why: 'tile-size', mb: Math.round(size / 2 ** 20) },
  });
}

function sliceStrips(layout: RasterLayout, rowBytes: number): RasterLayout {
  let rows = Math.max(1, Math.min(layout.blockHeight, Math.floor(SLICE_BYTES / rowBytes)));
  // A slice must not run from one strip into the next, which may lie anywhere in the file.
  while (layout.blocksDown > 1 && layout.blockHeight % rows !== 0) rows--;
  const planes = layout.separate ? layout.samples : 1;
  const blocksDown = Math.ceil(layout.height / rows);
  const offsets = new Float64Array(blocksDown * planes);
  const byteCounts = new Float64Array(blocksDown * planes);
  for (let slice = 0; slice < blocksDown * planes; slice++) {
    const row = (slice % blocksDown) * rows;
    const strip = Math.floor(row / layout.blockHeight);
    const from = Math.floor(slice / blocksDown) * layout.blocksDown + strip;
    const skipped = (row - strip * layout.blockHeight) * rowBytes;
    offsets[slice] = layout.offsets[from]! + skipped;
    byteCounts[slice] = Math.max(0, Math.min(layout.byteCounts[from]! - skipped, Math.min(rows, layout.height - row) * rowBytes));
  }
  return { ...layout, blockHeight: rows, blocksDown, offsets, byteCounts };
}

function damaged(fact: string): ImportProblem {
  return new ImportProblem({ code: 'damaged', fact, remedy: 'Export the file again from the program that made it, or copy it again.' });
}

function unsupported(fact: string, params: Readonly<Record<string, string>> = {}): ImportProblem {
  return new ImportProblem({ code: 'unsupported-encoding', fact, remedy: 'Export it as an uncompressed, LZW or Deflate GeoTIFF with 8-, 16- or 32-bit values.', params });
}
