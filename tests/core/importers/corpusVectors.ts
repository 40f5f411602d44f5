import { accepted, question, refused, squareLonLat, squareXY, text, utm31Prj, wgs84Prj, type CorpusCase } from './corpus.ts';
import { writeShapefile, type ShapefilePlan } from './writeShapefile.ts';
import { patchEntries, writeZip } from './writeZip.ts';

type Outcome = CorpusCase['outcome'];
const vector = (fileName: string) => (title: string, bytes: () => Uint8Array, outcome: Outcome, rest: Partial<CorpusCase> = {}): CorpusCase => ({ title, fileName, bytes, outcome, ...rest });
const json = vector('blocks.geojson');
const zipped = vector('soil.zip');
const kmlFile = vector('blocks.kml');
const gpxFile = vector('walk.gpx');

const feature = (coordinates: unknown, type = 'Polygon', properties: unknown = { name: 'A' }): unknown => ({ type: 'Feature', properties, geometry: { type, coordinates } });
const collection = (features: unknown[], more: object = {}): Uint8Array => text(JSON.stringify({ type: 'FeatureCollection', ...more, features }));
const square = feature([squareLonLat]);
const bowTie = [squareLonLat[0], squareLonLat[2], squareLonLat[1], squareLonLat[3], squareLonLat[0]];
const hole = [[3.0012, 44.7032], [3.0012, 44.7036], [3.0016, 44.7036], [3.0016, 44.7032], [3.0012, 44.7032]];
const ring = (corners: number): number[][] => Array.from({ length: corners + 1 }, (_, i) => [3.0016 + 0.0005 * Math.cos((2 * Math.PI * (i % corners)) / corners), 44.7034 + 0.0004 * Math.sin((2 * Math.PI * (i % corners)) / corners)]);

const geoJsonCases: CorpusCase[] = [
  json('a square', () => collection([square]), accepted()),
  json('a feature alone', () => text(JSON.stringify(square)), accepted()),
  json('a geometry alone', () => text(JSON.stringify({ type: 'Polygon', coordinates: [squareLonLat] })), accepted()),
  json('a hole and two parts', () => collection([feature([[squareLonLat, hole], [[[3.003, 44.703], [3.004, 44.703], [3.004, 44.704], [3.003, 44.703]]]], 'MultiPolygon')]), accepted()),
  json('an outer ring wound the wrong way', () => collection([feature([[...squareLonLat].reverse()])]), accepted()),
  json('a collection of geometries', () => text(JSON.stringify({ type: 'Feature', properties: {}, geometry: { type: 'GeometryCollection', geometries: [{ type: 'Polygon', coordinates: [squareLonLat] }] } })), accepted()),
  json('rows as lines with labels', () => collection([feature([[3.001, 44.703], [3.002, 44.704]], 'LineString', { row: '14' })]), accepted()),
  json('heights', () => collection([feature([squareLonLat.map(([x, y]) => [x, y, 120])])]), accepted('heights-dropped')),
  json('an unclosed ring', () => collection([feature([squareLonLat.slice(0, 4)])]), accepted('closed-rings')),
  json('a byte-order mark', () => text(`\ufeff${new TextDecoder().decode(collection([square]))}`), accepted()),
  json('UTF-16', () => new Uint8Array(Buffer.from(`\ufeff${new TextDecoder().decode(collection([square]))}`, 'utf16le')), accepted()),
  json('the same shape twice', () => collection([square, square]), accepted('doubled-shapes', 'overlapping-shapes')),
  json('soil units that overlap', () => collection([square, feature([squareLonLat.map(([x, y]) => [x + 0.0006, y])])]), accepted('overlapping-shapes')),
  json('a soil unit inside another', () => collection([square, feature([hole])]), accepted('overlapping-shapes')),
  json('a soil unit in the hole of another', () => collection([feature([squareLonLat, hole]), feature([hole])]), accepted()),
  json('neighbours along one border', () => collection([square, feature([squareLonLat.map(([x, y]) => [x + 0.00126, y])])]), accepted()),
  json('neighbours whose border was drawn twice', () => collection([square, feature([squareLonLat.map(([x, y]) => [x + 0.001259, y])])]), accepted()),
  json('an empty geometry beside a good one', () => collection([square, { type: 'Feature', properties: {}, geometry: null }]), accepted('empty-shapes')),
  json('a shape of two corners beside a good one', () => collection([square, feature([[[3.001, 44.703], [3.002, 44.703]]])]), accepted('empty-shapes', 'parts-dropped')),
  json('a shape smaller than a square metre', () => collection([feature([[[3.001, 44.703], [3.001001, 44.703], [3.001001, 44.703001], [3.001, 44.703]]])]), accepted('tiny-shapes')),
  json('a corner that is no number beside good ones', () => collection([feature([[...squareLonLat.slice(0, 4), ['x', 44.7035], squareLonLat[0]]])]), accepted('bad-positions')),
  json('attributes with dangerous names', () => text('{"type":"Feature","properties":{"__proto__":{"admin":true},"constructor":1},"geometry":{"type":"Polygon","coordinates":[[[3.001,44.703],[3.002,44.703],[3.002,44.704],[3.001,44.703]]]}}'), accepted()),
  json('20,000 features', () => collection(Array.from({ length: 20_000 }, (_, i) => feature([3.001 + (i % 200) * 1e-5, 44.703 + Math.floor(i / 200) * 1e-5], 'Point', { id: i }))), accepted()),
  json('an outline of 200,000 corners', () => collection([feature([ring(200_000)])]), accepted()),
  json('an outline of 500,000 corners', () => collection([feature([ring(500_000)])]), accepted()),
  json('an old crs member that says WGS 84', () => collection([square], { crs: { type: 'name', properties: { name: 'urn:ogc:def:crs:OGC:1.3:CRS84' } } }), accepted()),
  json('an old crs member with metres', () => collection([feature([[...squareXY].reverse()])], { crs: { type: 'name', properties: { name: 'urn:ogc:def:crs:EPSG::32631' } } }), accepted('crs-member')),
  json('a crs member of metres over degrees', () => collection([square], { crs: { type: 'name', properties: { name: 'EPSG:32631' } } }), question('reference-system', ['4326'])),
  json('a crs member nobody knows', () => collection([square], { crs: { type: 'name', properties: { name: 'mine' } } }), question('reference-system')),
  json('metres without a word', () => collection([feature([[...squareXY].reverse()])]), question('reference-system', ['32631'])),
  json('latitude before longitude', () => collection([feature([squareLonLat.map(([x, y]) => [y, x])])]), question('axes', ['swap', 'keep'])),
  json('latitude before longitude, answered', () => collection([feature([squareLonLat.map(([x, y]) => [y, x])])]), accepted(), { options: { answers: { swapAxes: true } } }),
  json('latitudes beyond the pole', () => collection([feature([squareLonLat.map(([x, y]) => [y, x + 100])])]), question('axes')),
  json('the other side of the world', () => collection([feature([squareLonLat.map(([x, y]) => [x + 140, -y])])]), question('placement', ['keep'])),
  json('a shape as large as the world', () => collection([feature([[[-180, -90], [180, -90], [180, 90], [-180, 90], [-180, -90]]])]), refused('bad-geometry', /latitude 90/)),
  json('a field named by a character that nothing can keep', () => text(JSON.stringify({ type: 'Feature', properties: { '\0x': 1, [`n${'a'.repeat(5000)}`]: 2 }, geometry: { type: 'Polygon', coordinates: [squareLonLat] } })), { kind: 'accepted', warnings: [] }),
  json('a bow-tie', () => collection([feature([bowTie])]), { kind: 'accepted', warnings: ['self-crossing'] }),
  json('a number too large for any', () => text('{"type":"Polygon","coordinates":[[[1e400,44],[3,44],[3,45],[1e400,44]]]}'), refused('no-layer', /usable coordinates/)),
  json('NaN', () => text('{"type":"Polygon","coordinates":[[[NaN,44],[3,44],[3,45],[3,44]]]}'), refused('damaged', /not valid JSON/)),
  json('cut off', () => collection([square]).subarray(0, 90), refused('damaged', /not valid JSON/)),
  json('brackets 100,000 deep', () => text(`{"type":"Polygon","coordinates":${'['.repeat(100_000)}${']'.repeat(100_000)}}`), refused('damaged', /nested/)),
  json('JSON of another kind', () => text('{"name":"x","items":[1,2]}'), refused('wrong-type', /not GeoJSON/)),
  json('no features', () => collection([]), refused('no-layer', /no shapes/)),
  json('only empty geometries', () => collection([{ type: 'Feature', properties: null, geometry: null }]), refused('no-layer', /usable coordinates/)),
  json('a feature a line', () => text(`${JSON.stringify(square)}\n${JSON.stringify(feature([squareLonLat.map(([x, y]) => [x + 0.003, y])]))}\n`), accepted(), { fileName: 'blocks.geojsonl' }),
  json('a text sequence with record separators', () => text(`\u001e${JSON.stringify(square)}\n`), accepted(), { fileName: 'blocks.geojsons' }),
  json('a feature a line, the second cut off', () => text(`${JSON.stringify(square)}\n${JSON.stringify(square).slice(0, 40)}`), refused('damaged', /not valid JSON/)),
  json('TopoJSON', () => text('{"type":"Topology","objects":{},"arcs":[]}'), refused('wrong-type', /TopoJSON, not GeoJSON/)),
  json('EsriJSON', () => text('{"geometryType":"esriGeometryPolygon","features":[]}'), refused('wrong-type', /EsriJSON, not GeoJSON/)),
  json('UTF-32', () => Uint8Array.from([0xff, 0xfe, 0, 0, ...[...'{}'].flatMap((letter) => [letter.charCodeAt(0), 0, 0, 0])]), refused('wrong-type', /UTF-32 letters; save it as UTF-8/)),
  json('a collection inside a collection', () => collection([{ type: 'Feature', properties: {}, geometry: { type: 'GeometryCollection', geometries: [{ type: 'GeometryCollection', geometries: [{ type: 'Polygon', coordinates: [squareLonLat] }] }] } }]), accepted()),
  json('KML under the name of GeoJSON', () => text('<?xml version="1.0"?><kml xmlns="http://www.opengis.net/kml/2.2"><Placemark><Polygon><outerBoundaryIs><LinearRing><coordinates>3.001,44.703 3.002,44.703 3.002,44.704 3.001,44.703</coordinates></LinearRing></outerBoundaryIs></Polygon></Placemark></kml>'), accepted()),
];

interface ZipPlan extends Partial<ShapefilePlan> {
  prj?: string | null;
  cpg?: string;
  leaveOut?: readonly string[];
  more?: Readonly<Record<string, Uint8Array | string>>;
  change?: (parts: Record<string, Uint8Array>) => void;
  folder?: string;
}

/** A zipped shapefile around the estate. */
function shapeZip({ prj = utm31Prj, cpg, leaveOut = [], more = {}, change, folder = '', ...plan }: ZipPlan = {}): Uint8Array {
  const parts: Record<string, Uint8Array> = { ...writeShapefile({ records: [[squareXY]], ...plan }) };
  if (prj !== null) parts['prj'] = text(prj);
  if (cpg !== undefined) parts['cpg'] = text(cpg);
  change?.(parts);
  return writeZip({ ...Object.fromEntries(Object.entries(parts).filter(([ending]) => !leaveOut.includes(ending)).map(([ending, bytes]) => [`${folder}soil.${ending}`, bytes])), ...more });
}

const bowTieXY = [squareXY[0]!, squareXY[2]!, squareXY[1]!, squareXY[3]!, squareXY[0]!];
const holeXY = [[500020, 4950020], [500060, 4950020], [500060, 4950060], [500020, 4950060], [500020, 4950020]];
const otherXY = [[500200, 4950000], [500200, 4950100], [500300, 4950100], [500300, 4950000], [500200, 4950000]];
const latin1 = (words: string): Uint8Array => Uint8Array.from(words, (letter) => letter.charCodeAt(0) & 0xff);

const shapefileCases: CorpusCase[] = [
  zipped('a shapefile', () => shapeZip(), accepted()),
  zipped('a shapefile in a folder with packer rubbish', () => shapeZip({ folder: 'my soil/', more: { '__MACOSX/my soil/._soil.shp': 'x' } }), accepted()),
  zipped('in degrees', () => shapeZip({ prj: wgs84Prj, records: [[[...squareLonLat].reverse()]] }), accepted()),
  zipped('a hole and a second part', () => shapeZip({ records: [[squareXY, holeXY, otherXY]] }), accepted()),
  zipped('a shapefile beside GeoJSON, which is not read', () => shapeZip({ more: { 'walk.geojson': '{"type":"FeatureCollection","features":[]}' } }), accepted('other-files')),
  zipped('polygons with heights', () => shapeZip({ kind: 15 }), accepted('heights-dropped')),
  zipped('polygons with measures', () => shapeZip({ kind: 25 }), accepted()),
  zipped('points instead of areas', () => shapeZip({ kind: 1, records: [[[[500010, 4950010]]]] }), accepted()),
  zipped('lines', () => shapeZip({ kind: 3, records: [[[[500010, 4950010], [500090, 4950090]]]] }), accepted()),
  zipped('an empty shape beside a good one', () => shapeZip({ records: [[squareXY], null] }), accepted('empty-shapes')),
  zipped('letters in UTF-8 with .cpg', () => shapeZip({ rows: [['Série']], cpg: 'UTF-8' }), accepted()),
  zipped('letters in ISO 8859-1 with .cpg', () => shapeZip({ rows: [['Série']], encode: latin1, cpg: 'ISO-8859-1' }), accepted()),
  zipped('letters that nobody declares', () => shapeZip({ rows: [['Série']], encode: latin1 }), accepted('encoding-guessed')),
  zipped('no .prj', () => shapeZip({ prj: null }), question('reference-system', ['32631'])),
  zipped('no .prj, answered', () => shapeZip({ prj: null }), accepted(), { options: { answers: { epsg: 32631 } } }),
  zipped('a .prj of rubbish', () => shapeZip({ prj: 'not a projection' }), question('reference-system')),
  zipped('a .prj on NAD 27', () => shapeZip({ prj: utm31Prj.replace('D_WGS_1984', 'D_North_American_1927').replaceAll('WGS_1984_UTM', 'NAD_1927_UTM').replace('6378137.0,298.257223563', '6378206.4,294.9786982') }), question('reference-system')),
  zipped('a .prj in degrees over metres', () => shapeZip({ prj: wgs84Prj }), question('reference-system', ['32631'])),
  zipped('two layers', () => shapeZip({ more: Object.fromEntries(Object.entries(writeShapefile({ records: [[squareXY]] })).map(([ending, bytes]) => [`blocks.${ending}`, bytes]).concat([['blocks.prj', text(utm31Prj)]])) }), question('layer', ['soil', 'blocks'])),
  zipped('two layers, one chosen', () => shapeZip({ more: Object.fromEntries(Object.entries(writeShapefile({ records: [[squareXY]] })).map(([ending, bytes]) => [`blocks.${ending}`, bytes]).concat([['blocks.prj', text(utm31Prj)]])) }), accepted(), { options: { answers: { layer: 'blocks' } } }),
  zipped('letters of a Japanese table with .cpg', () => shapeZip({ rows: [['?']], encode: () => Uint8Array.from([0x94, 0x5f, 0x8f, 0xea, 0x20, 0x20]), cpg: '932' }), accepted()),
  zipped('two folders with a layer of one name', () => writeZip(Object.fromEntries(['2023', '2024'].flatMap((year) => Object.entries(writeShapefile({ records: [[squareXY]] })).map(([ending, bytes]) => [`${year}/soil.${ending}`, bytes] as const).concat([[`${year}/soil.prj`, text(utm31Prj)]])))), question('layer', ['2023/soil', '2024/soil'])),
  zipped('two folders with a layer of one name, the second chosen', () => writeZip(Object.fromEntries(['2023', '2024'].flatMap((year) => Object.entries(writeShapefile({ records: [[squareXY]] })).map(([ending, bytes]) => [`${year}/soil.${ending}`, bytes] as const).concat([[`${year}/soil.prj`, text(utm31Prj)]])))), accepted(), { options: { answers: { layer: '2024/soil' } } }),
  zipped('no .shx', () => shapeZip({ leaveOut: ['shx'] }), accepted('missing-shx')),
  zipped('no .dbf', () => shapeZip({ leaveOut: ['dbf'] }), accepted('missing-dbf')),
  zipped('no .shp', () => shapeZip({ leaveOut: ['shp'] }), refused('missing-part', /no \.shp file/)),
  zipped('more rows than shapes', () => shapeZip({ rows: [['a'], ['b'], ['c']] }), accepted('row-count')),
  zipped('more shapes than rows', () => shapeZip({ records: [[squareXY], [otherXY]], rows: [['a']] }), accepted('row-count')),
  zipped('a table that promises 4 billion rows', () => shapeZip({ change: ({ dbf }) => new DataView(dbf!.buffer).setUint32(4, 0xffffffff, true) }), accepted()),
  zipped('a damaged table', () => shapeZip({ change: ({ dbf }) => new DataView(dbf!.buffer).setUint16(8, 3, true) }), accepted('damaged-dbf')),
  zipped('a self-crossing outline', () => shapeZip({ records: [[bowTieXY]] }), accepted('self-crossing')),
  zipped('a record that claims a billion corners beside a good one', () => shapeZip({ records: [[squareXY], [otherXY]], change: ({ shp }) => new DataView(shp!.buffer).setInt32(100 + 8 + 40, 1_000_000_000, true) }), accepted('damaged-shapes', 'empty-shapes')),
  zipped('a record with a negative length', () => shapeZip({ change: ({ shp }) => new DataView(shp!.buffer).setInt32(104, -8) }), refused('truncated', /middle of its shapes/)),
  zipped('cut inside its shapes', () => shapeZip({ change: (parts) => { parts['shp'] = parts['shp']!.subarray(0, 170); } }), refused('truncated', /middle of its shapes/)),
  zipped('40 bytes of a .shp', () => shapeZip({ change: (parts) => { parts['shp'] = parts['shp']!.subarray(0, 40); } }), refused('truncated', /40 bytes/)),
  zipped('patches in space', () => shapeZip({ change: ({ shp }) => new DataView(shp!.buffer).setInt32(32, 31, true) }), refused('unsupported-encoding', /patches/)),
  zipped('a .shp of another kind of file', () => shapeZip({ change: (parts) => { parts['shp'] = new Uint8Array(200); } }), refused('wrong-type', /not a shapefile/)),
  zipped('a .shp alone, not zipped', () => writeShapefile({ records: [[squareXY]] }).shp, refused('missing-part', /one part of a shapefile/), { fileName: 'soil.shp' }),
];

/** Replaces a name in a ZIP by another of the same length, everywhere it is written. */
function renamed(zip: Uint8Array, from: string, to: string): Uint8Array {
  const out = Buffer.from(zip);
  for (let at = out.indexOf(from); at >= 0; at = out.indexOf(from, at + 1)) out.write(to, at, 'latin1');
  return new Uint8Array(out);
}

const archiveCases: CorpusCase[] = [
  zipped('a path out of the archive', () => renamed(shapeZip({ more: { 'aa/aa/evil.txt': 'x' } }), 'aa/aa/evil.txt', '../../evil.txt'), refused('unsafe-archive', /unsafe path/)),
  zipped('an absolute path', () => renamed(shapeZip({ more: { 'xetc/passwd': 'x' } }), 'xetc/passwd', '/etc/passwd'), refused('unsafe-archive', /unsafe path/)),
  zipped('a Windows path', () => renamed(shapeZip({ more: { 'xx/x.txt': 'x' } }), 'xx/x.txt', 'C:\\x.txt'), refused('unsafe-archive', /unsafe path/)),
  zipped('a link', () => patchEntries(shapeZip(), (entry) => { entry.setUint8(5, 3); entry.setUint32(38, 0xa1ff0000, true); }), refused('unsafe-archive', /a link/)),
  zipped('a password', () => patchEntries(shapeZip(), (entry) => entry.setUint16(8, 1, true)), refused('encrypted', /password/)),
  zipped('50 MB of zeros', () => writeZip({ 'soil.shp': new Uint8Array(5e7) }), refused('unsafe-archive', /times its packed size/)),
  zipped('a size that lies', () => patchEntries(shapeZip(), (entry) => entry.setUint32(24, 10, true)), refused('damaged', /unpacks to|promises/)),
  zipped('a size of 3 GB', () => patchEntries(shapeZip(), (entry) => entry.setUint32(24, 3e9, true)), refused('unsafe-archive', /MB is the most/)),
  zipped('entries over the same bytes', () => patchEntries(shapeZip({ more: { 'a.bin': new Uint8Array(4000).map((_, i) => (i * 31) % 251), 'b.bin': new Uint8Array(4000).map((_, i) => (i * 37) % 241) } }), (entry) => { entry.setUint32(20, 3000, true); entry.setUint32(24, 4000, true); }), refused('unsafe-archive', /overlap/)),
  zipped('70,000 entries', () => { const zip = writeZip({ 'a.txt': 'x' }); const view = new DataView(zip.buffer, zip.byteOffset); view.setUint16(zip.length - 22 + 10, 65000, true); return zip; }, refused('unsafe-archive', /65000 files/)),
  zipped('3,000 real entries', () => writeZip(Object.fromEntries(Array.from({ length: 3000 }, (_, i) => [`${i}.txt`, 'x'])), 0), refused('unsafe-archive', /3000 files/)),
  zipped('an archive in an archive', () => writeZip({ 'inner.zip': shapeZip() }), refused('unsafe-archive', /another archive/)),
  zipped('a checksum that is wrong', () => patchEntries(shapeZip(), (entry) => entry.setUint32(16, 1, true)), refused('damaged', /checksum/)),
  zipped('a first letter that was changed', () => shapeZip().map((byte, at) => (at === 0 ? byte + 1 : byte)), refused('wrong-type', /beginning is damaged/)),
  zipped('cut off', () => shapeZip().subarray(0, 300), refused('damaged', /list of contents is missing/)),
  zipped('a packing method nobody reads', () => patchEntries(shapeZip(), (entry) => entry.setUint16(10, 99, true)), refused('unsupported-encoding', /method 99/)),
  zipped('no files', () => writeZip({}), refused('empty', /no files/)),
  zipped('nothing of use', () => writeZip({ 'readme.txt': 'hello', 'photo.jpg': 'x' }), refused('missing-part', /readme\.txt/)),
  zipped('a spreadsheet', () => writeZip({ '[Content_Types].xml': '<x/>', 'xl/workbook.xml': '<x/>' }), refused('wrong-type', /office document/), { fileName: 'soil.xlsx' }),
  zipped('a table in an archive', () => writeZip({ 'ec.csv': 'lat,lon\n1,2\n' }), refused('missing-part', /send the table itself/)),
  zipped('a file geodatabase', () => writeZip({ 'soil.gdb/a00000001.gdbtable': 'x' }), refused('wrong-type', /geodatabase/)),
  zipped('two KML files in an archive', () => writeZip({ 'a.kml': placemark(polygonKml), 'b.kml': placemark(polygonKml) }), question('layer', ['a', 'b'])),
  zipped('two KML files in an archive, one chosen', () => writeZip({ 'a.kml': placemark(polygonKml), 'b.kml': placemark(polygonKml) }), accepted('heights-dropped'), { options: { answers: { layer: 'b' } } }),
  zipped('GeoJSON in an archive', () => writeZip({ 'soil.geojson': collection([square]) }), accepted()),
];

const placemark = (body: string): string => `<?xml version="1.0" encoding="UTF-8"?><kml xmlns="http://www.opengis.net/kml/2.2"><Document><Placemark><name>Upper block</name>${body}</Placemark></Document></kml>`;
const polygonKml = `<Polygon><outerBoundaryIs><LinearRing><coordinates>${squareLonLat.map(([x, y]) => `${x},${y},0`).join(' ')}</coordinates></LinearRing></outerBoundaryIs></Polygon>`;
const track = (points: readonly (readonly [number, number])[]): Uint8Array => text(`<?xml version="1.0"?><gpx version="1.1" creator="test" xmlns="http://www.topografix.com/GPX/1/1"><trk><name>walk</name><trkseg>${points.map(([x, y]) => `<trkpt lat="${y}" lon="${x}"></trkpt>`).join('')}</trkseg></trk></gpx>`);

const xmlCases: CorpusCase[] = [
  kmlFile('a KML polygon', () => text(placemark(polygonKml)), accepted('heights-dropped')),
  kmlFile('KML with several shapes in one placemark', () => text(placemark(`<MultiGeometry>${polygonKml}${polygonKml}</MultiGeometry>`)), accepted('doubled-shapes', 'heights-dropped', 'overlapping-shapes')),
  kmlFile('a link to other files', () => text(placemark(polygonKml).replace('</Document>', '<NetworkLink><Link><href>http://example.invalid/x.kml</href></Link></NetworkLink></Document>')), accepted('heights-dropped', 'network-link')),
  kmlFile('KMZ', () => writeZip({ 'doc.kml': placemark(polygonKml) }), accepted('heights-dropped'), { fileName: 'blocks.kmz' }),
  kmlFile('a KMZ whose cover only names its parts', () => writeZip({ 'doc.kml': '<kml xmlns="http://www.opengis.net/kml/2.2"><Document><NetworkLink><Link><href>layers/soil.kml</href></Link></NetworkLink></Document></kml>', 'layers/soil.kml': placemark(polygonKml) }), accepted('heights-dropped'), { fileName: 'blocks.kmz' }),
  kmlFile('folders in folders of a KMZ', () => writeZip({ 'files/a/doc.kml': placemark(polygonKml).replaceAll('<Placemark>', '<Folder><Folder><Placemark>').replaceAll('</Placemark>', '</Placemark></Folder></Folder>') }), accepted('heights-dropped'), { fileName: 'blocks.kmz' }),
  kmlFile('spaces after the commas', () => text(placemark(polygonKml.replaceAll(',', ', '))), accepted('heights-dropped')),
  kmlFile('a picture over the ground', () => text('<kml xmlns="http://www.opengis.net/kml/2.2"><GroundOverlay><Icon><href>x.png</href></Icon><LatLonBox><north>44.704</north><south>44.703</south><east>3.002</east><west>3.001</west></LatLonBox></GroundOverlay></kml>'), refused('no-layer', /only a picture laid over the ground/)),
  kmlFile('nothing but a link to another computer', () => text('<kml xmlns="http://www.opengis.net/kml/2.2"><NetworkLink><Region><LatLonAltBox><north>44.704</north><south>44.703</south><east>3.002</east><west>3.001</west></LatLonAltBox></Region><Link><href>http://example.invalid/x.kml</href></Link></NetworkLink></kml>'), refused('no-layer', /link to another computer/)),
  kmlFile('a placemark without a shape', () => text(placemark('')), refused('no-layer', /usable coordinates|no placemarks/)),
  kmlFile('entities that grow', () => text(`<?xml version="1.0"?><!DOCTYPE lolz [<!ENTITY a "aaaa"><!ENTITY b "&a;&a;&a;&a;">]><kml xmlns="http://www.opengis.net/kml/2.2"><name>&b;</name></kml>`), refused('damaged', /entities/)),
  kmlFile('XML cut off', () => text(placemark(polygonKml).slice(0, 200)), refused('damaged', /not valid XML/)),
  kmlFile('elements 5,000 deep', () => text(`<kml xmlns="http://www.opengis.net/kml/2.2">${'<Folder>'.repeat(5000)}${'</Folder>'.repeat(5000)}</kml>`), refused('damaged', /nested/)),
  kmlFile('XML of another kind', () => text('<?xml version="1.0"?><invoice><line/></invoice>'), refused('wrong-type', /XML/)),
  gpxFile('a walk around a block', () => track([...squareLonLat.slice(0, 4), [3.00101, 44.70301]]), accepted('track-closed')),
  gpxFile('a walk that does not come back', () => track(squareLonLat.slice(0, 4).map(([x, y], i) => [x + i * 0.01, y] as const)), accepted('open-track')),
  gpxFile('waypoints', () => text('<?xml version="1.0"?><gpx version="1.1" creator="test" xmlns="http://www.topografix.com/GPX/1/1"><wpt lat="44.7032" lon="3.0012"><name>post</name></wpt></gpx>'), accepted()),
  gpxFile('an empty GPX', () => text('<?xml version="1.0"?><gpx version="1.1" creator="test" xmlns="http://www.topografix.com/GPX/1/1"></gpx>'), refused('no-layer', /no tracks/)),
  vector('blocks.fgb')('FlatGeobuf', () => Uint8Array.from([0x66, 0x67, 0x62, 3, 0x66, 0x67, 0x62, 0]), refused('wrong-type', /a FlatGeobuf file/)),
  vector('blocks.parquet')('Parquet', () => text('PAR1xxxx'), refused('wrong-type', /a Parquet file/)),
  vector('plan.dxf')('a drawing', () => text('  0\nSECTION\n  2\nENTITIES\n'), refused('wrong-type', /a DXF drawing/)),
  vector('blocks.mif')('a MapInfo exchange file', () => text('Version 300\nCharset "Neutral"\nDelimiter ","\n'), refused('wrong-type', /MapInfo exchange/)),
  vector('soil.dbf')('the table of a shapefile alone', () => writeShapefile({ records: [[squareXY]] }).dbf, refused('missing-part', /one part of a shapefile/)),
  vector('soil.shx')('the index of a shapefile alone', () => writeShapefile({ records: [[squareXY]] }).shx, refused('missing-part', /one part of a shapefile/)),
  vector('plan.pdf')('a PDF', () => text('%PDF-1.7 x'), refused('wrong-type', /a PDF document/)),
];

export const vectorCases: readonly CorpusCase[] = [...geoJsonCases, ...shapefileCases, ...archiveCases, ...xmlCases];
