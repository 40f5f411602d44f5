import initSqlJs, { type Database } from 'sql.js';
import { layerBounds, type FeatureLayer } from './featureLayer.ts';
import { geometryBlob, geometryTypes } from './geoPackageGeometry.ts';

/** "GPKG" and version 1.3 in the file's header (OGC 12-128r17, 1.1.1.1.1). */
const [applicationId, userVersion] = [0x47504b47, 10300];
const wgs84 = 'GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563,AUTHORITY["EPSG","7030"]],AUTHORITY["EPSG","6326"]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433],AUTHORITY["EPSG","4326"]]';

/** Layers side by side in one OGC GeoPackage 1.3 that opens in a desktop GIS as it is. */
export async function geoPackageOf(layers: readonly FeatureLayer[]): Promise<Buffer> {
  const { Database } = await initSqlJs();
  const db = new Database();
  try {
    db.run(`pragma application_id = ${applicationId}; pragma user_version = ${userVersion};`);
    db.run(requiredTables);
    for (const [name, id, organization, definition] of [['Undefined cartesian', -1, 'NONE', 'undefined'], ['Undefined geographic', 0, 'NONE', 'undefined'], ['WGS 84', 4326, 'EPSG', wgs84]] as const) {
      db.run('insert into gpkg_spatial_ref_sys (srs_name, srs_id, organization, organization_coordsys_id, definition) values (?, ?, ?, ?, ?)', [name, id, organization, id, definition]);
    }
    for (const layer of layers) writeLayer(db, layer);
    return Buffer.from(db.export());
  } finally {
    db.close();
  }
}

/** Table and column names are our own words, so they need no quoting. */
function writeLayer(db: Database, layer: FeatureLayer): void {
  const { name, title, fields, features, madeAt } = layer;
  db.run(`create table ${name} (fid integer primary key autoincrement not null, geom blob, ${fields.map((field) => `${field.name} ${field.type}`).join(', ')})`);
  // Identifiers must differ from layer to layer; titles that people made may not.
  const bounds = features.length === 0 ? [null, null, null, null] : [...layerBounds(layer)];
  db.run('insert into gpkg_contents (table_name, data_type, identifier, description, last_change, min_x, min_y, max_x, max_y, srs_id) values (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)', [name, 'features', name, title, madeAt.toISOString(), ...bounds, 4326]);
  db.run('insert into gpkg_geometry_columns values (?, ?, ?, ?, 0, 0)', [name, 'geom', geometryTypes[features[0]?.shape.kind ?? 'point'], 4326]);
  const columns = ['geom', ...fields.map((field) => field.name)];
  for (const { values, shape } of features) db.run(`insert into ${name} (${columns.join(', ')}) values (${columns.map(() => '?').join(', ')})`, [geometryBlob(shape, 4326), ...values]);
}

/** Annex C of the standard. */
const requiredTables = `
  create table gpkg_spatial_ref_sys (srs_name text not null, srs_id integer primary key, organization text not null, organization_coordsys_id integer not null, definition text not null, description text);
  create table gpkg_contents (table_name text not null primary key, data_type text not null, identifier text unique, description text default '', last_change datetime not null default (strftime('%Y-%m-%dT%H:%M:%fZ','now')),
    min_x double, min_y double, max_x double, max_y double, srs_id integer, constraint fk_gc_r_srs_id foreign key (srs_id) references gpkg_spatial_ref_sys(srs_id));
  create table gpkg_geometry_columns (table_name text not null, column_name text not null, geometry_type_name text not null, srs_id integer not null, z tinyint not null, m tinyint not null,
    constraint pk_geom_cols primary key (table_name, column_name), constraint uk_gc_table_name unique (table_name),
    constraint fk_gc_tn foreign key (table_name) references gpkg_contents(table_name), constraint fk_gc_srs foreign key (srs_id) references gpkg_spatial_ref_sys (srs_id));
`;
