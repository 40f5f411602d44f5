import { accepted, question, refused, utm31Prj, type CorpusCase } from './corpus.ts';
import { writeTiff, type TiffPlan } from './writeTiff.ts';
import { writeZip } from './writeZip.ts';

type Geo = NonNullable<TiffPlan['geo']>;
const tiff = (geo: Geo | null) => writeTiff({ width: 60, height: 50, geo: geo === null ? null : { x: 500000, y: 4950100, pixel: 2, ...geo } });
const raster = (title: string, geo: Geo | null, outcome: CorpusCase['outcome'], rest: Partial<CorpusCase> = {}): CorpusCase => ({ title, fileName: 'layer.tif', bytes: () => tiff(geo), outcome, ...rest });
const zipped = (title: string, files: Parameters<typeof writeZip>[0], outcome: CorpusCase['outcome']): CorpusCase => ({ title, fileName: 'layer.zip', bytes: () => writeZip(files), outcome });

const utm = [1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, 32631];
/** User-defined projection on WGS 84: method, then keys and numbers of its own. */
const own = (method: number, numbers: Readonly<Record<number, number>>): Pick<Geo, 'keys' | 'doubles'> => {
  const ids = Object.keys(numbers).map(Number);
  return { keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 2048, 0, 1, 4326, 3072, 0, 1, 32767, 3074, 0, 1, 32767, 3075, 0, 1, method, 3076, 0, 1, 9001, ...ids.flatMap((id, at) => [id, 34736, 1, at])], doubles: ids.map((id) => numbers[id]!) };
};
const pe = `ESRI PE String = ${utm31Prj}|`;
const xml = (body: string) => `<PAMDataset>${body}</PAMDataset>`;
const srs = `<SRS dataAxisToSRSAxisMapping="1,2">${utm31Prj.replaceAll('"', '&quot;')}</SRS>`;

/** What GeoTIFFs and the files beside them say about place and reference system, right, oddly and wrongly. */
export const referenceCases: readonly CorpusCase[] = [
  // Metres of UTM written in feet: the unit in the keys goes before the code's own, as in the reference reader.
  raster('coordinates of a metre grid in US survey feet', { keys: [...utm, 3076, 0, 1, 9003], x: 500000 / (1200 / 3937), y: 4950100 / (1200 / 3937), pixel: 2 / (1200 / 3937) }, accepted('unit-of-length')),
  raster('a metre grid that claims feet but lies where metres would', { keys: [...utm, 3076, 0, 1, 9002] }, question('placement', ['keep'])),
  raster('a system written as text into a citation', { keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, 32767, 3073, 34737, pe.length, 0], text: pe }, accepted()),
  raster('a citation that names a system and nothing else', { keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 3073, 34737, 22, 0], text: 'WGS 84 / UTM zone 31N|' }, question('reference-system', ['32631'])),
  raster('an old code of Web Mercator', { epsg: 900913 % 65536, keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, 3785], x: 334030, y: 5575200 }, accepted()),
  raster('Mercator true to scale at 44 degrees', { ...own(7, { 3078: 44, 3080: 3 }), x: 0, y: 3995167 }, accepted()),
  raster('equidistant cylinder true to scale at 44 degrees', { ...own(17, { 3078: 44, 3080: 3 }), x: 0, y: 4976415 }, accepted()),
  raster('a prime meridian of its own', { keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 2048, 0, 1, 32767, 2051, 0, 1, 8903, 2056, 0, 1, 7030, 3072, 0, 1, 32767, 3074, 0, 1, 32767, 3075, 0, 1, 1, 3076, 0, 1, 9001, 3080, 34736, 1, 0, 3081, 34736, 1, 1, 3082, 34736, 1, 2, 3083, 34736, 1, 1, 3092, 34736, 1, 3], doubles: [0.66277083, 0, 500000, 0.9996] }, accepted('assumed-datum')),
  raster('angles in grads', { keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 2048, 0, 1, 32767, 2054, 0, 1, 9105, 2056, 0, 1, 7030, 3072, 0, 1, 32767, 3074, 0, 1, 16031, 3076, 0, 1, 9001] }, question('reference-system')),
  raster('kilometres', { keys: [1024, 0, 1, 1, 1025, 0, 1, 1, 2048, 0, 1, 4326, 3072, 0, 1, 32767, 3074, 0, 1, 16031, 3076, 0, 1, 9036], x: 500, y: 4950.1, pixel: 0.002 }, accepted()),
  raster('depths below a level', { keys: [...utm, 4096, 0, 1, 5831] }, accepted('depths')),
  raster('one control point', { tiePoints: [0, 0, 0, 500000, 4950100, 0] }, refused('no-placement', /control points/)),
  raster('a world file without six numbers', null, refused('no-placement', /does not hold the six numbers/), { options: { worldFileText: '2\n0\n0\n-2\n500001\n' } }),
  zipped('place and system in an auxiliary file', { 'layer.tif': tiff(null), 'layer.tif.aux.xml': xml(`${srs}<GeoTransform> 5.0e5, 2, 0, 4950100, 0, -2</GeoTransform>`) }, accepted()),
  zipped('an auxiliary file of statistics', { 'layer.tif': tiff(null), 'layer.tif.aux.xml': xml('<PAMRasterBand band="1"/>') }, refused('no-placement', /without a place/)),
  zipped('a mask beside the picture', { 'layer.tif': tiff({}), 'layer.tif.msk': writeTiff({ width: 60, height: 50, type: 'u8', geo: null, value: (col) => (col < 20 ? 0 : 255) }) }, accepted()),
  zipped('a mask of another size', { 'layer.tif': tiff({}), 'layer.tif.msk': writeTiff({ width: 30, height: 25, type: 'u8', geo: null }) }, refused('mask-misfit', /30 × 25 pixels and the picture 60 × 50/)),
  zipped('a mask that covers everything', { 'layer.tif': tiff({}), 'layer.tif.msk': writeTiff({ width: 60, height: 50, type: 'u8', geo: null, value: () => 0 }) }, refused('no-values', /marked as missing/)),
];
