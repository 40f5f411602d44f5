import initSqlJs, { type Database } from 'sql.js';

type Ring = readonly (readonly [number, number])[];

export interface GeoPackageLayer {
  readonly name: string;
  readonly srsId: number;
  readonly rows: readonly { readonly rings: readonly Ring[] | null; readonly unit?: string; readonly awc?: number }[];
}

export interface GeoPackagePlan {
  readonly layers: readonly GeoPackageLayer[];
  /** Rows of the table of systems: id, name, organisation, code, definition. */
  readonly systems?: readonly (readonly [number, string, string, number, string])[];
  /** Numbers in the box before each shape: 0 none, 1 sides, 2 with heights. */
  readonly envelope?: 0 | 1 | 2;
  readonly bigEndian?: boolean;
  /** Changes the finished database before it is written. */
  readonly then?: (database: Database) => void;
}

const sql = await initSqlJs();

/** A GeoPackage as OGC 12-128r18 lays it out, small. */
export function writeGeoPackage({ layers, systems = defaultSystems, envelope = 1, bigEndian = false, then = () => undefined }: GeoPackagePlan): Uint8Array {
  const database = new sql.Database();
  database.run('pragma application_id = 1196444487');
  database.run('create table gpkg_spatial_ref_sys (srs_name text, srs_id integer primary key, organization text, organization_coordsys_id integer, definition text, description text)');
  database.run('create table gpkg_contents (table_name text primary key, data_type text, identifier text, srs_id integer)');
  database.run('create table gpkg_geometry_columns (table_name text, column_name text, geometry_type_name text, srs_id integer, z tinyint, m tinyint)');
  for (const [id, name, organization, code, definition] of systems) database.run('insert into gpkg_spatial_ref_sys values (?, ?, ?, ?, ?, null)', [name, id, organization, code, definition]);
  for (const { name, srsId, rows } of layers) {
    database.run(`create table "${name}" (fid integer primary key, geom blob, unit text, awc real)`);
    database.run("insert into gpkg_contents values (?, 'features', ?, ?)", [name, name, srsId]);
    database.run("insert into gpkg_geometry_columns values (?, 'geom', 'POLYGON', ?, 0, 0)", [name, srsId]);
    rows.forEach(({ rings, unit = 'loam', awc = 120 }, at) => database.run(`insert into "${name}" values (?, ?, ?, ?)`, [at + 1, rings === null ? null : shape(rings, { srsId, envelope, bigEndian }), unit, awc]));
  }
  then(database);
  const bytes = database.export();
  database.close();
  return bytes;
}

const defaultSystems = [
  [4326, 'WGS 84', 'EPSG', 4326, 'GEOGCS["WGS 84"]'],
  [32631, 'WGS 84 / UTM zone 31N', 'EPSG', 32631, ''],
  [0, 'Undefined', 'NONE', 0, 'undefined'],
] as const;

/** Header and well-known binary of a polygon. */
export function shape(rings: readonly Ring[], { srsId, envelope, bigEndian }: { srsId: number; envelope: 0 | 1 | 2; bigEndian: boolean }): Uint8Array {
  const box = [0, 4, 6][envelope]!;
  const bytes = new Uint8Array(8 + 8 * box + 9 + rings.reduce((sum, ring) => sum + 4 + 16 * ring.length, 0));
  const view = new DataView(bytes.buffer);
  const little = !bigEndian;
  bytes.set([0x47, 0x50, 0, (envelope << 1) | (little ? 1 : 0)]);
  view.setInt32(4, srsId, little);
  let at = 8 + 8 * box;
  bytes[at] = little ? 1 : 0;
  view.setUint32(at + 1, 3, little);
  view.setUint32(at + 5, rings.length, little);
  at += 9;
  for (const ring of rings) {
    view.setUint32(at, ring.length, little);
    at += 4;
    for (const [x, y] of ring) {
      view.setFloat64(at, x, little);
      view.setFloat64(at + 8, y, little);
      at += 16;
    }
  }
  return bytes;
}
