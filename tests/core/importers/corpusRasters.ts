import { deflateSync } from 'node:zlib';
import { accepted, question, refused, text, type CorpusCase } from './corpus.ts';
import { writeTiff, type TiffPlan } from './writeTiff.ts';
import { writeZip } from './writeZip.ts';

const small: TiffPlan = { width: 60, height: 50, geo: { x: 500000, y: 4950100, pixel: 2 } };
const tiff = (plan: Partial<TiffPlan> = {}): Uint8Array => writeTiff({ ...small, ...plan, geo: plan.geo === undefined ? small.geo! : plan.geo });
const geo = (plan: Partial<NonNullable<TiffPlan['geo']>>) => ({ ...small.geo!, ...plan });
const raster = (title: string, bytes: () => Uint8Array, outcome: CorpusCase['outcome'], rest: Partial<CorpusCase> = {}): CorpusCase => ({ title, fileName: 'layer.tif', bytes, outcome, ...rest });
const cut = (bytes: Uint8Array, part: number): Uint8Array => bytes.subarray(0, Math.floor(bytes.length * part));
/** Directory first, pictures behind it, as most programs write: cutting the end loses pixels, not tags. */
const png = Uint8Array.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 0, 0, 13]);

/** Puts the first directory's pointer to the directory itself. */
function looped(): Uint8Array {
  const bytes = tiff();
  const view = new DataView(bytes.buffer);
  const at = view.getUint32(4, true);
  view.setUint32(at + 2 + view.getUint16(at, true) * 12, at, true);
  return bytes;
}

/** Changes one directory entry: `change` gets a view of its 12 bytes. */
function patched(tag: number, change: (entry: DataView) => void, plan: Partial<TiffPlan> = {}): Uint8Array {
  const bytes = tiff(plan);
  const view = new DataView(bytes.buffer);
  const at = view.getUint32(4, true);
  for (let i = 0; i < view.getUint16(at, true); i++) if (view.getUint16(at + 2 + i * 12, true) === tag) change(new DataView(bytes.buffer, at + 2 + i * 12, 12));
  return bytes;
}

/** The number that the bytes of a float give when they are read the wrong way round. */
function scrambled(value: number): number {
  const view = new DataView(new ArrayBuffer(4));
  view.setFloat32(0, value);
  return view.getFloat32(0, true);
}

const whole: CorpusCase[] = [
  raster('a plain GeoTIFF', () => tiff(), accepted()),
  raster('BigTIFF', () => tiff({ bigTiff: true, tile: 16 }), accepted()),
  raster('big-endian with many tiles', () => tiff({ bigEndian: true, tile: 16, compression: 8 }), accepted()),
  raster('big-endian BigTIFF with many tiles', () => tiff({ bigEndian: true, bigTiff: true, tile: 16 }), accepted()),
  raster('200 bands', () => tiff({ width: 8, height: 8, bands: 200, separate: true }), accepted()),
  raster('one pixel', () => tiff({ width: 1, height: 1 }), accepted('constant')),
  raster('30 m pixels', () => tiff({ geo: geo({ pixel: 30 }) }), accepted()),
  raster('south-up by six numbers', () => tiff({ geo: geo({ transformation: [2, 0, 0, 500000, 0, 2, 0, 4950000, 0, 0, 0, 0, 0, 0, 0, 1] }) }), accepted()),
  raster('turned by 17 degrees', () => tiff({ geo: geo({ transformation: [1.9, 0.58, 0, 500000, 0.58, -1.9, 0, 4950100, 0, 0, 0, 0, 0, 0, 0, 1] }) }), accepted()),
  raster('a negative pixel height', () => tiff({ geo: geo({ height: -2 }) }), accepted('negative-scale')),
  raster('a TIFF in an archive', () => writeZip({ 'flight/layer.tif': tiff(), 'flight/readme.txt': 'x' }), accepted(), { fileName: 'layer.zip' }),
  raster('a TIFF in an archive with world and projection files', () => writeZip({ 'layer.tif': tiff({ geo: null }), 'layer.tfw': '2\n0\n0\n-2\n500001\n4950099\n', 'layer.prj': 'EPSG:32631' }), accepted(), { fileName: 'layer.zip' }),
  raster('NaN and infinity among floats', () => tiff({ type: 'f32', value: (col, row) => (col === 0 ? NaN : col === 1 ? Infinity : col + row) }), accepted()),
  raster('pixels that mean points', () => tiff({ geo: geo({ isPoint: true }) }), accepted()),
  raster('a palette', () => tiff({ type: 'u8', value: (col) => col, tags: { 262: [3] } }), accepted('palette')),
  raster('colours of a printer', () => tiff({ type: 'u8', bands: 4, value: (col, row) => col + row, tags: { 262: [5] } }), accepted('picture-colours')),
  raster('colours of the eye', () => tiff({ type: 'u8', bands: 3, value: (col, row) => col + row, tags: { 262: [8] } }), accepted('picture-colours')),
  raster('a capture date', () => tiff({ tags: { 306: '2026:07:14 10:30:00' } }), accepted()),
  raster('geographic pixels', () => tiff({ geo: { epsg: 4326, x: 3.0005, y: 44.7045, pixel: 0.00002 } }), accepted()),
  raster('Web Mercator', () => tiff({ geo: { epsg: 3857, x: 334030, y: 5575200, pixel: 2 } }), accepted()),
  raster('a national grid on its own datum', () => tiff({ geo: { epsg: 27572, x: 652650, y: 1966850, pixel: 2 } }), accepted('datum')),
  raster('state plane in US survey feet, far from this estate', () => tiff({ geo: { epsg: 2226, x: 6500000, y: 1900000, pixel: 6 } }), question('placement')),
  raster('its own Transverse Mercator without a code', () => tiff({ geo: geo({ keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 2048, 0, 1, 4326, 3072, 0, 1, 32767, 3074, 0, 1, 32767, 3075, 0, 1, 1, 3076, 0, 1, 9001, 3080, 34736, 1, 0, 3081, 34736, 1, 1, 3082, 34736, 1, 2, 3083, 34736, 1, 3, 3092, 34736, 1, 4], doubles: [3, 0, 500000, 0, 0.9996] }) }), accepted()),
];

const doubtful: CorpusCase[] = [
  raster('no reference system', () => tiff({ geo: geo({ keys: [] }) }), question('reference-system', ['32631'])),
  raster('no reference system and an answer', () => tiff({ geo: geo({ keys: [] }) }), accepted(), { options: { answers: { epsg: 32631 } } }),
  raster('an answer that does not ship', () => tiff({ geo: geo({ keys: [] }) }), refused('unknown-reference', /EPSG:99999/), { options: { answers: { epsg: 99999 } } }),
  raster('a code nobody knows', () => tiff({ geo: geo({ epsg: 2999 }) }), question('reference-system', ['32631'])),
  raster('a local system', () => tiff({ geo: geo({ keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 1026, 34737, 6, 0, 3072, 0, 1, 32767], text: 'local|' }) }), question('reference-system')),
  raster('no system, a projection file beside it', () => tiff({ geo: geo({ keys: [] }) }), accepted(), { options: { projectionFileText: 'EPSG:32631' } }),
  raster('no place, a world file beside it', () => tiff({ geo: null }), question('reference-system', ['32631']), { options: { worldFileText: '2\n0\n0\n-2\n500001\n4950099\n' } }),
  raster('metres that claim to be degrees', () => tiff({ geo: geo({ epsg: 4326 }) }), question('reference-system', ['32631'])),
  raster('degrees that claim to be metres', () => tiff({ geo: { x: 3.0005, y: 44.7045, pixel: 0.00002 } }), question('reference-system', ['4326'])),
  raster('the wrong hemisphere', () => tiff({ geo: geo({ epsg: 32731 }) }), question('placement', ['keep', '32631'])),
  raster('the neighbouring zone', () => tiff({ geo: geo({ epsg: 32630 }) }), question('placement', ['keep', '32631'])),
  raster('4 km away', () => tiff({ geo: geo({ x: 504300 }) }), accepted('far-from-estate')),
  raster('untagged −9999', () => tiff({ type: 'f32', value: (col, row) => (col < 10 ? -9999 : 0.3 + row / 100) }), question('no-data', ['-9999'])),
  raster('untagged −9999, answered', () => tiff({ type: 'f32', value: (col, row) => (col < 10 ? -9999 : 0.3 + row / 100) }), accepted(), { options: { answers: { noData: -9999 } } }),
  raster('untagged zeros beside reflectance', () => tiff({ value: (col, row) => (col < 10 ? 0 : 1500 + 10 * row) }), question('no-data', ['0'])),
  raster('untagged lowest float', () => tiff({ type: 'f32', value: (col, row) => (col < 10 ? -3.4028234663852886e38 : row) }), accepted()),
  raster('a no-data tag that is no number', () => tiff({ noData: 'none' }), accepted('no-data-text')),
  raster('a last band of 0 and 65535 that is not declared as a mask', () => tiff({ type: 'u16', bands: 3, value: (col, row, band) => (band === 2 ? (col < 10 ? 0 : 65535) : 100 + col + row) }), question('mask-band', ['mask', 'values'])),
  raster('the same, and the answer that it is a mask', () => tiff({ type: 'u16', bands: 3, value: (col, row, band) => (band === 2 ? (col < 10 ? 0 : 65535) : 100 + col + row) }), accepted(), { options: { answers: { maskBand: true } } }),
  raster('a last band of 65535 everywhere', () => tiff({ type: 'u16', bands: 3, value: (col, row, band) => (band === 2 ? 65535 : 100 + col + row) }), accepted('mask-full')),
  raster('a last band that the metadata call alpha', () => tiff({ type: 'u16', bands: 2, value: (col, row, band) => (band === 1 ? (col < 10 ? 0 : 65535) : 100 + col + row), tags: { 42112: '<GDALMetadata><Item name="COLORINTERP" sample="1" role="colorinterp">Alpha</Item></GDALMetadata>' } }), accepted()),
  raster('tiles left out without a mark for missing values', () => tiff({ tile: 16, block: (honest, index) => (index > 6 ? new Uint8Array(0) : honest) }), accepted('sparse')),
  raster('floats whose bytes stand in the wrong order', () => tiff({ type: 'f32', value: (col, row) => scrambled(0.4 + Math.abs(Math.sin(col * 12.9 + row * 78.2)) / 2) }), refused('damaged', /another order/)),
  raster('a constant picture', () => tiff({ value: () => 7 }), accepted('constant')),
  raster('saturated bytes', () => tiff({ type: 'u8', value: (col) => Math.min(255, 100 + 4 * col) }), accepted('saturated')),
  raster('untagged 255 far above the other bytes', () => tiff({ type: 'u8', value: (col) => (col < 20 ? 255 : 100 + col) }), question('no-data', ['255'])),
  raster('untagged −10000 of a mosaic', () => tiff({ type: 'f32', value: (col, row) => (col === 0 && row < 3 ? -10_000 : 0.3 + (col * 50 + row) / 9000) }), question('no-data', ['-10000'])),
  raster('untagged −1 in an index', () => tiff({ type: 'f32', value: (col, row) => (col < 10 ? -1 : 0.3 + (col * 50 + row) / 9000) }), question('no-data', ['-1'])),
  raster('untagged zeros in an index of decimals', () => tiff({ type: 'f32', value: (col, row) => (col < 10 ? 0 : 0.05 + (col * 50 + row) / 9000) }), question('no-data', ['0'])),
  raster('an index of few steps that begins at 0', () => tiff({ type: 'f32', value: (col, row) => ((col + row) % 10) / 10 }), accepted()),
  raster('a chain of pictures that loops', () => looped(), accepted('broken-chain')),
  raster('a next directory outside the file', () => tiff({ next: 0x7fffffff }), accepted('broken-chain')),
  raster('geo keys that point nowhere', () => tiff({ geo: geo({ keys: [1024, 0, 1, 1, 3072, 34736, 1, 900] }) }), question('reference-system')),
];

const unusable: CorpusCase[] = [
  raster('two TIFFs in an archive', () => writeZip({ 'a.tif': tiff(), 'b.tif': tiff() }), refused('no-layer', /2 TIFF files/), { fileName: 'layers.zip' }),
  raster('no place at all', () => tiff({ geo: null }), refused('no-placement', /without a place/)),
  raster('control points that bend', () => tiff({ geo: geo({ tiePoints: [0, 0, 0, 500000, 4950100, 0, 60, 0, 0, 500120, 4950110, 0, 60, 50, 0, 500150, 4950000, 0, 0, 50, 0, 500000, 4950000, 0] }) }), refused('no-placement', /control points/)),
  raster('pixels without size', () => tiff({ geo: geo({ pixel: 0 }) }), refused('no-placement', /no size/)),
  raster('every pixel missing', () => tiff({ value: () => 9, noData: '9' }), refused('no-values', /every pixel/)),
  raster('every pixel NaN', () => tiff({ type: 'f32', value: () => NaN }), refused('no-values', /every pixel/)),
  raster('complex numbers', () => tiff({ tags: { 339: [6] } }), refused('unsupported-encoding', /complex/)),
  raster('JPEG compression', () => tiff({ tags: { 259: [7] } }), refused('unsupported-encoding', /JPEG/)),
  raster('LERC compression', () => tiff({ tags: { 259: [34887] } }), refused('unsupported-encoding', /LERC/)),
  raster('WebP compression', () => tiff({ tags: { 259: [50001] } }), refused('unsupported-encoding', /WebP/)),
  raster('JPEG XL compression', () => tiff({ tags: { 259: [50002] } }), refused('unsupported-encoding', /JPEG XL/)),
  raster('a compression nobody knows', () => tiff({ tags: { 259: [4711] } }), refused('unsupported-encoding', /4711/)),
  raster('24-bit floats', () => tiff({ tags: { 258: [24], 339: [3] } }), refused('unsupported-encoding', /24-bit/)),
  raster('bands of different depth', () => tiff({ bands: 2, tags: { 258: [16, 8] } }), refused('unsupported-encoding', /different depths/)),
  raster('reversed bits', () => tiff({ tags: { 266: [2] } }), refused('unsupported-encoding', /reverse/)),
  raster('an unknown predictor', () => tiff({ tags: { 317: [9] } }), refused('unsupported-encoding', /predictor 9/)),
];

const broken: CorpusCase[] = [
  raster('an empty file', () => new Uint8Array(0), refused('empty', /empty/)),
  raster('four bytes of a TIFF', () => tiff().subarray(0, 4), refused('truncated', /4 bytes/)),
  raster('cut inside the directory', () => cut(tiff(), 0.99), refused('truncated', /bytes/)),
  raster('cut before the directory', () => cut(tiff(), 0.5), refused('truncated', /bytes/)),
  raster('cut inside the pixels', () => tiff({ tags: { 273: [0x00fffff0] } }), refused('truncated', /ends inside its picture/)),
  raster('a corrupt Deflate strip', () => tiff({ compression: 8, block: (honest) => honest.map((byte, i) => (i > 8 ? byte ^ 0xff : byte)) }), refused('damaged', /damaged/)),
  raster('a Deflate strip that ends early', () => tiff({ compression: 8, block: (honest) => honest.subarray(0, honest.length >> 1) }), refused('damaged', /bytes/)),
  raster('a Deflate strip that unpacks to 100 MB', () => tiff({ compression: 8, block: () => new Uint8Array(deflateSync(new Uint8Array(1e8))) }), refused('damaged', /damaged/)),
  raster('LZW of rubbish', () => tiff({ tags: { 259: [5] }, block: () => Uint8Array.from({ length: 200 }, (_, i) => (i * 97) % 251) }), refused('damaged', /damaged/)),
  raster('PackBits of rubbish', () => tiff({ tags: { 259: [32773] }, block: () => Uint8Array.from({ length: 30 }, () => 5) }), refused('damaged', /damaged/)),
  raster('ZSTD of rubbish', () => tiff({ tags: { 259: [50000] } }), refused('damaged', /damaged/)),
  raster('ZSTD that claims 4 GB', () => tiff({ tags: { 259: [50000] }, block: () => Uint8Array.from([0x28, 0xb5, 0x2f, 0xfd, 0xa0, 0, 0, 0, 0xff, 1, 0, 0, 0]) }), refused('damaged', /more than their tile/)),
  raster('LZMA of rubbish', () => tiff({ tags: { 259: [34925] } }), refused('damaged', /xz/)),
  raster('a tag that claims 4 billion values', () => patched(258, (entry) => entry.setUint32(4, 0xffffffff, true)), refused('damaged', /4294967295/)),
  raster('a tag that points past the end', () => patched(33550, (entry) => entry.setUint32(8, 0x7fffff00, true)), refused('truncated', /past the end/)),
  raster('a field type nobody knows', () => patched(284, (entry) => entry.setUint16(2, 99, true)), refused('damaged', /field type 99/)),
  raster('declared 60,000 × 60,000 in one strip', () => tiff({ tags: { 256: [60000], 257: [60000], 278: [60000] }, compression: 8 }), refused('too-large', /MB/)),
  raster('declared 60,000 × 60,000 without compression', () => tiff({ tags: { 256: [60000], 257: [60000], 278: [60000] } }), refused('truncated', /shorter than it claims/)),
  raster('declared 60,000 × 60,000 with one tile listed', () => tiff({ tile: 256, tags: { 256: [60000], 257: [60000] } }), refused('damaged', /tiles or strips/)),
  raster('tiles of 100,000 × 100,000', () => tiff({ tile: 64, compression: 8, tags: { 322: [100000], 323: [100000] } }), refused('too-large', /MB/)),
  raster('no width', () => tiff({ tags: { 256: [0] } }), refused('damaged', /0 × 50/)),
  raster('5,000 bands', () => tiff({ tags: { 277: [5000] } }), refused('damaged', /5000 bands/)),
  raster('no list of strips', () => tiff({ tags: { 273: null } }), refused('damaged', /where its pixels are/)),
  raster('a directory of 0 entries', () => { const bytes = tiff(); const view = new DataView(bytes.buffer); view.setUint16(view.getUint32(4, true), 0, true); return bytes; }, refused('damaged', /0 entries/)),
  raster('a first directory at the header itself', () => { const bytes = tiff(); new DataView(bytes.buffer).setUint32(4, 0, true); return bytes; }, refused('damaged', /no picture/)),
  raster('a BigTIFF offset beyond every file', () => { const bytes = tiff({ bigTiff: true }); new DataView(bytes.buffer).setBigUint64(8, 0xffffffffffffffffn, true); return bytes; }, refused('damaged', /larger than any file/)),
  raster('a PNG under the name of a TIFF', () => png, refused('wrong-type', /a PNG picture/)),
  raster('a web page under the name of a TIFF', () => text('<!DOCTYPE html><html><body>Not found</body></html>'), refused('wrong-type', /a web page/)),
  raster('a program under the name of a TIFF', () => Uint8Array.from([0x4d, 0x5a, 0x90, 0, 3, 0, 0, 0]), refused('wrong-type', /a Windows program/)),
  raster('a photograph', () => Uint8Array.from([0xff, 0xd8, 0xff, 0xe0, 0, 16, 0x4a, 0x46, 0x49, 0x46, 0, 1, 1, 0, 0, 1, 0, 1, 0, 0]), refused('wrong-type', /a JPEG picture/), { fileName: 'field.jpg' }),
  raster('a photograph under the name of a TIFF', () => Uint8Array.from([0xff, 0xd8, 0xff, 0xe1, 0, 16, 0x45, 0x78, 0x69, 0x66, 0, 0]), refused('wrong-type', /a JPEG picture/)),
  raster('an Erdas Imagine picture', () => Uint8Array.from([...text('EHFA_HEADER_TAG\0'), 1, 2, 3]), refused('wrong-type', /Erdas Imagine/), { fileName: 'field.img' }),
  raster('a grid in ESRI ASCII format', () => text('ncols 4\nnrows 3\nxllcorner 500000\nyllcorner 4950000\ncellsize 2\nNODATA_value -9999\n1 2 3 4\n'), refused('wrong-type', /ESRI ASCII/), { fileName: 'dem.asc' }),
  raster('a virtual picture', () => text('<VRTDataset rasterXSize="512" rasterYSize="512"></VRTDataset>'), refused('wrong-type', /only points to other files/), { fileName: 'mosaic.vrt' }),
  raster('bytes without a zero among them', () => Uint8Array.from({ length: 3000 }, (_, i) => 1 + ((i * 97) % 31)), refused('wrong-type', /binary file/), { fileName: 'layer.bin' }),
  raster('a name that some systems keep for themselves', () => tiff(), accepted(), { fileName: 'CON.tif' }),
  raster('a name in letters from elsewhere', () => png, refused('wrong-type', /^vignoble_été_葡萄园_🍇\.tif: /), { fileName: 'vignoble_été_葡萄园_🍇.tif' }),
  raster('a name of dots and spaces', () => png, refused('wrong-type', /: It is a PNG picture/), { fileName: ' .. ' }),
  raster('a name with the end of a text in it', () => png, refused('wrong-type', /^a/), { fileName: 'a\u0000b\n.tif' }),
  raster('a name that commands', () => png, refused('wrong-type', /PNG/), { fileName: "$(reboot);'-- DROP TABLE layers.tif" }),
  raster('control points alone', () => tiff({ geo: { tiePoints: [0, 0, 0, 500000, 4950000, 0, 4, 0, 0, 500040, 4950000, 0, 0, 3, 0, 500000, 4949970, 0, 4, 3, 0, 500040, 4949970, 0] } }), accepted('corner-points')),
  raster('a name with a path, quotes and direction marks', () => png, refused('wrong-type', /^evil "x"\.tif: /), { fileName: '../../etc/\u202eevil "x".tif' }),
  raster('a name of 4,000 letters', () => png, refused('wrong-type', /^a{60}…a{12}\.tif: /), { fileName: `${'a'.repeat(3996)}.tif` }),
];

export const rasterCases: readonly CorpusCase[] = [...whole, ...doubtful, ...unusable, ...broken];
