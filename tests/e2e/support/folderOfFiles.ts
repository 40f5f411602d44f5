import { frameOf } from '../../../server/demo/layerFiles.ts';
import { writeTiff, type TiffPlan } from '../../core/importers/writeTiff.ts';
import { patchEntries, writeZip } from '../../core/importers/writeZip.ts';
import { corner, field, place, type UploadFile } from './files.ts';

/** What an agronomist finds in the folder of last year: one good picture among ten damaged or doubtful files. */

const file = (name: string, mimeType: string, bytes: Uint8Array | string): UploadFile => ({ name, mimeType, buffer: Buffer.from(bytes as Uint8Array) });
const tiff = (name: string, bytes: Uint8Array) => file(name, 'image/tiff', bytes);

/** An index over the field and 10 m around it, in pixels of half a metre; it rises to the east. */
function index(plan: Partial<TiffPlan> = {}): Uint8Array {
  const { anchor } = frameOf(place);
  const geo = { epsg: place.epsg, x: anchor[0] + field.west - 10, y: anchor[1] + field.south + field.height + 10, pixel: 0.5, ...plan.geo };
  return writeTiff({ width: 2 * (field.width + 20), height: 2 * (field.height + 20), type: 'f32', value: vigour, ...plan, geo });
}
const vigour = (col: number, row: number) => 0.35 + col / 2000 + 0.02 * Math.sin(col * 1.7 + row * row);

/** Readings every 5 m, with semicolons, decimal commas, and latitude in the column of longitude. */
function swappedTable(): string {
  const lines = ['point;longitude;latitude;EC (mS/m)'];
  for (let y = 2; y < field.height; y += 5) {
    for (let x = 2; x < field.width; x += 5) {
      const [lon, lat] = corner(field.west + x, field.south + y);
      lines.push([lines.length, lat, lon, (20 + x / 10 + 3 * Math.sin(y / 20)).toFixed(2)].map((each) => String(each).replace('.', ',')).join(';'));
    }
  }
  return lines.join('\r\n');
}

/** Two areas of soil whose second outline crosses itself. */
function crossingSoil(): string {
  const { west, south, width, height } = field;
  const ring = (...corners: [number, number][]) => [...corners, corners[0]!].map(([x, y]) => corner(west + x, south + y));
  const area = (soil: string, coordinates: [number, number][]) => ({ type: 'Feature', properties: { SOIL: soil }, geometry: { type: 'Polygon', coordinates: [ring(...coordinates)] } });
  const [middle, beyond] = [width / 2, width + 20];
  return JSON.stringify({ type: 'FeatureCollection', features: [area('Sand', [[-20, -20], [middle, -20], [middle, height + 20], [-20, height + 20]]), area('Clay', [[middle, -20], [beyond, -20], [beyond, height + 20], [beyond - 20, height + 35], [beyond - 5, height + 35], [beyond - 15, height + 20], [middle, height + 20]])] });
}

/** The questions of a picture that holds an index already. */
export const indexAnswers = { 'What is it?': 'Vigour image', 'Which index does it hold?': 'NDVI', 'When was it taken?': '2026-07-14', 'How were the alleys?': 'bare', 'At which growth stage?': 'veraison', 'Which pixels shall count?': 'all of them' };

export const folder = {
  /** Refused when they arrive, with the reason. */
  refused: [
    { file: tiff('cut-short.tif', index().slice(0, 40_000)), because: /ends too early: \d+ bytes are needed and it has 40000/ },
    { file: tiff('saved-page.tif', new TextEncoder().encode('<!doctype html><html><body>Sign in to download</body></html>')), because: /web page/ },
    { file: file('locked.zip', 'application/zip', patchEntries(writeZip({ 'soil.shp': new Uint8Array(200), 'soil.dbf': new Uint8Array(80) }), (view) => view.setUint16(8, 1, true))), because: /password/ },
    { file: file('half-a-shapefile.zip', 'application/zip', writeZip({ 'soil.dbf': new Uint8Array(80), 'soil.prj': 'x' })), because: /no \.shp file/ },
    // 450 km on the grid are 450 km on the ground within the scale of UTM (0.04 %) and the estate's own extent (2 km).
    { file: tiff('far-away.tif', index({ geo: { y: frameOf(place).anchor[1] + 450_000 } })), because: /the nearest is 4(48|49|50) km away/ },
  ],
  /** Loaded once somebody has answered what the file leaves open. */
  good: tiff('vigour-2026.tif', index()),
  withoutReference: tiff('no-reference.tif', index({ geo: { keys: [1, 1, 0, 1, 1025, 0, 1, 1] } })),
  untaggedVoids: tiff('voids.tif', index({ value: (col, row) => (col > 220 ? -9999 : vigour(col, row)) })),
  bytes: tiff('bytes-ndvi.tif', index({ type: 'u8', value: (col, row) => Math.round(255 * vigour(col, row)) })),
  swapped: file('survey.csv', 'text/csv', swappedTable()),
  crossing: file('soil-areas.geojson', 'application/geo+json', crossingSoil()),
};
