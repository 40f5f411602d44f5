import { accepted, question, refused, squareLonLat, squareXY, text, type CorpusCase } from './corpus.ts';
import { shape, writeGeoPackage, type GeoPackageLayer, type GeoPackagePlan } from './writeGeoPackage.ts';
import { writeZip } from './writeZip.ts';

const file = (title: string, bytes: () => Uint8Array, outcome: CorpusCase['outcome'], rest: Partial<CorpusCase> = {}): CorpusCase => ({ title: `GeoPackage: ${title}`, fileName: 'soil.gpkg', bytes, outcome, ...rest });
const soil = (more: Partial<GeoPackageLayer> = {}): GeoPackageLayer => ({ name: 'soil', srsId: 4326, rows: [{ rings: [squareLonLat] }], ...more });
const made = (more: Partial<GeoPackagePlan> = {}) => () => writeGeoPackage({ layers: [soil()], ...more });
/** A polygon of one ring that says it has four thousand million corners. */
const lyingShape = (): Uint8Array => {
  const bytes = shape([squareLonLat], { srsId: 4326, envelope: 0, bigEndian: false });
  new DataView(bytes.buffer).setUint32(17, 4_000_000_000, true);
  return bytes;
};
/** A curve polygon of one ring, which is an arc. */
const curve = (): Uint8Array => Uint8Array.of(0x47, 0x50, 0, 1, 0xe6, 0x10, 0, 0, 1, 10, 0, 0, 0, 1, 0, 0, 0, 1, 8, 0, 0, 0, 0, 0, 0, 0);
/** The square as a curve polygon whose ring is a plain line, as some programs save every polygon. */
const straightCurve = (): Uint8Array => {
  const plain = shape([squareLonLat], { srsId: 4326, envelope: 0, bigEndian: false });
  return Uint8Array.from([...plain.subarray(0, 8), 1, 10, 0, 0, 0, 1, 0, 0, 0, 1, 2, 0, 0, 0, ...plain.subarray(17)]);
};
/** The square in a collection. */
const gathered = (): Uint8Array => {
  const plain = shape([squareLonLat], { srsId: 4326, envelope: 0, bigEndian: false });
  return Uint8Array.from([...plain.subarray(0, 8), 1, 7, 0, 0, 0, 1, 0, 0, 0, ...plain.subarray(8)]);
};
/** The square with a height at each corner. */
const raised = (): Uint8Array => {
  const numbers = squareLonLat.flatMap(([x, y]) => [x, y, 80]);
  const bytes = new Uint8Array(8 + 13 + 8 * numbers.length);
  const view = new DataView(bytes.buffer);
  bytes.set([0x47, 0x50, 0, 1, 0xe6, 0x10, 0, 0, 1]);
  [1003, 1, squareLonLat.length].forEach((word, at) => view.setUint32(9 + 4 * at, word, true));
  numbers.forEach((value, at) => view.setFloat64(21 + 8 * at, value, true));
  return bytes;
};
const only = (blob: () => Uint8Array) => made({ layers: [soil({ rows: [] })], then: (database) => database.run('insert into soil values (9, ?, null, null)', [blob()]) });

export const databaseCases: readonly CorpusCase[] = [
  file('a square in degrees', made(), accepted()),
  file('metres, told by the system of the layer', made({ layers: [soil({ srsId: 32631, rows: [{ rings: [squareXY] }] })] }), accepted()),
  file('shapes without a box before them', made({ envelope: 0 }), accepted()),
  file('shapes with heights in their box', made({ envelope: 2 }), accepted()),
  file('big-endian shapes', made({ bigEndian: true }), accepted()),
  file('corners with heights', only(raised), accepted('heights-dropped')),
  file('an empty shape beside a good one', made({ layers: [soil({ rows: [{ rings: [squareLonLat] }, { rings: null }] })] }), accepted('empty-shapes')),
  file('a name with quotes and a statement in it', made({ layers: [soil({ name: "so'il; drop table x" })] }), accepted()),
  file('in a ZIP', () => writeZip({ 'soil.gpkg': made()() }), accepted(), { fileName: 'soil.zip' }),
  file('written with a journal beside it', () => made()().fill(2, 18, 20), accepted()),
  file('two layers', made({ layers: [soil(), soil({ name: 'blocks' })] }), question('layer', ['soil', 'blocks'])),
  file('two layers, answered', made({ layers: [soil(), soil({ name: 'blocks' })] }), accepted(), { options: { answers: { layer: 'blocks' } } }),
  file('two layers in different systems, the other one chosen', made({ layers: [soil(), soil({ name: 'blocks', srsId: 32631, rows: [{ rings: [squareXY] }] })] }), accepted(), { options: { answers: { layer: 'soil' } } }),
  file('no reference system', made({ layers: [soil({ srsId: 0, rows: [{ rings: [squareXY] }] })] }), question('reference-system', ['32631'])),
  file('a reference system nobody knows', made({ layers: [soil({ srsId: 900_100, rows: [{ rings: [squareXY] }] })], systems: [[900_100, 'Estate grid', 'NONE', 1, 'LOCAL_CS["Estate grid"]']] }), question('reference-system', ['32631'])),
  file('a reference system that is not in the file', made({ layers: [soil({ srsId: 77, rows: [{ rings: [squareXY] }] })] }), question('reference-system')),
  file('degrees named as metres', made({ layers: [soil({ srsId: 32631 })] }), question('reference-system', ['4326'])),
  file('a damaged shape beside a good one', made({ then: (database) => database.run('insert into soil values (9, ?, null, null)', [lyingShape()]) }), accepted('damaged-shapes', 'empty-shapes')),
  file('a shape of curves beside a good one', made({ then: (database) => database.run('insert into soil values (9, ?, null, null)', [curve()]) }), accepted('curved-shapes', 'empty-shapes')),
  file('a curve polygon of straight sides', only(straightCurve), accepted()),
  file('a shape in a collection', only(gathered), accepted()),
  file('nothing but curves', only(curve), refused('bad-geometry', /curved sides/)),
  file('a view beside a layer', made({ then: (database) => {
    database.run('create view shown as select * from soil');
    database.run("insert into gpkg_contents values ('shown', 'features', 'shown', 4326)");
    database.run("insert into gpkg_geometry_columns values ('shown', 'geom', 'POLYGON', 4326, 0, 0)");
  } }), accepted('view-layer')),
  file('no rows', made({ layers: [soil({ rows: [] })] }), refused('no-layer', /no shapes/)),
  file('only shapes without corners', made({ layers: [soil({ rows: [{ rings: null }] })] }), refused('no-layer', /usable coordinates/)),
  file('only pictures', made({ layers: [], then: (database) => database.run("insert into gpkg_contents values ('tiles', 'tiles', 'tiles', 4326)") }), refused('no-layer', /no layer of shapes/)),
  file('a layer that computes without end', made({ layers: [], then: (database) => {
    database.run('create view soil as with recursive n(i) as (select 1 union all select i + 1 from n) select i as fid, zeroblob(10) as geom from n');
    database.run("insert into gpkg_contents values ('soil', 'features', 'soil', 4326)");
    database.run("insert into gpkg_geometry_columns values ('soil', 'geom', 'POLYGON', 4326, 0, 0)");
  } }), refused('no-layer', /a view/)),
  file('a list of layers that computes without end', made({ then: (database) => {
    database.run('alter table gpkg_contents rename to old');
    database.run("create view gpkg_contents as with recursive n(i) as (select 1 union all select i + 1 from n) select 'soil' as table_name, 'features' as data_type, i as identifier, 4326 as srs_id from n");
  } }), refused('wrong-type', /not a GeoPackage/)),
  file('a column that computes', made({ then: (database) => database.run('alter table soil add column big blob generated always as (zeroblob(900000000)) virtual') }), accepted()),
  file('a layer that is named and not there', made({ then: (database) => database.run('drop table soil') }), refused('no-layer', /not in the file/)),
  file('a layer without its column of shapes', made({ then: (database) => database.run('alter table soil drop column geom') }), refused('damaged', /no column "geom"/)),
  file('a database of another kind', made({ layers: [], then: (database) => database.run('drop table gpkg_contents') }), refused('wrong-type', /not a GeoPackage/)),
  file('cut off', () => made()().subarray(0, 9000), refused('truncated', /ends too early/)),
  file('only its first line', () => text('SQLite format 3\0rest'), refused('truncated', /ends too early/)),
  file('pages overwritten', () => made()().fill(0xff, 4096, 12_288), refused('damaged', /damaged/)),
  file('a header and nothing that follows from it', () => new Uint8Array(20_000).fill(7).map((byte, at) => (at < 16 ? 'SQLite format 3\0'.charCodeAt(at) : byte)), refused('damaged', /damaged|database/)),
];
