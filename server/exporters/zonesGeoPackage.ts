import initSqlJs, { type Database } from 'sql.js';
import { closeRing, windForGeoJson } from '../../shared/geo/rings.ts';
import { geometryBlob } from './geoPackageGeometry.ts';
import type { ExportedZone, ZoneExport } from './zoneExport.ts';

/** "GPKG" and version 1.3 in the file's header (OGC 12-128r17, 1.1.1.1.1). */
const [applicationId, userVersion] = [0x47504b47, 10300];
const wgs84 = 'GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563,AUTHORITY["EPSG","7030"]],AUTHORITY["EPSG","6326"]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433],AUTHORITY["EPSG","4326"]]';

/** Zones as features and the runs along the rows as attributes, in one OGC GeoPackage 1.3 that opens in a desktop GIS as it is. */
export async function zonesGeoPackage(input: ZoneExport): Promise<Buffer> {
  const { Database } = await initSqlJs();
  const db = new Database();
  try {
    db.run(`pragma application_id = ${applicationId}; pragma user_version = ${userVersion};`);
    db.run(requiredTables);
    for (const [name, id, organization, definition] of [['Undefined cartesian', -1, 'NONE', 'undefined'], ['Undefined geographic', 0, 'NONE', 'undefined'], ['WGS 84', 4326, 'EPSG', wgs84]] as const) {
      db.run('insert into gpkg_spatial_ref_sys (srs_name, srs_id, organization, organization_coordsys_id, definition) values (?, ?, ?, ?, ?)', [name, id, organization, id, definition]);
    }
    writeZones(db, input);
    writeRuns(db, input);
    return Buffer.from(db.export());
  } finally {
    db.close();
  }
}

function writeZones(db: Database, input: ZoneExport): void {
  db.run('create table zones (fid integer primary key autoincrement not null, geom blob, block text, zone integer, name text, colour text, area_ha real, vines integer, missing integer, zoning integer, zoning_name text, state text)');
  const shapes = input.zones.map((zone) => ({ zone, rings: ringsOf(zone) }));
  const [lons, lats] = [0, 1].map((axis) => shapes.flatMap(({ rings }) => rings.flat(2).map((point) => point[axis]!)));
  const bounds = [Math.min(...lons!), Math.min(...lats!), Math.max(...lons!), Math.max(...lats!)];
  contents(db, { table: 'zones', kind: 'features', title: `${input.blockName}, zones`, madeAt: input.madeAt, bounds });
  db.run("insert into gpkg_geometry_columns values ('zones', 'geom', 'MULTIPOLYGON', 4326, 0, 0)");
  for (const { zone, rings } of shapes) {
    db.run('insert into zones (geom, block, zone, name, colour, area_ha, vines, missing, zoning, zoning_name, state) values (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)', [
      geometryBlob(rings, 4326), input.blockName, zone.number, zone.name, zone.colour, Math.round(zone.areaM2) / 10_000, zone.vines, zone.missing, input.zoningNumber, input.zoningName, input.state,
    ]);
  }
}

function writeRuns(db: Database, input: ZoneExport): void {
  db.run('create table rows (fid integer primary key autoincrement not null, row text, from_vine integer, to_vine integer, zone integer, zone_name text)');
  contents(db, { table: 'rows', kind: 'attributes', title: `${input.blockName}, rows by zone`, madeAt: input.madeAt, bounds: null });
  for (const run of input.runs) db.run('insert into rows (row, from_vine, to_vine, zone, zone_name) values (?, ?, ?, ?, ?)', [run.rowLabel, run.fromVine, run.toVine, run.zone, run.zoneName]);
}

function contents(db: Database, { table, kind, title, madeAt, bounds }: { table: string; kind: string; title: string; madeAt: Date; bounds: number[] | null }): void {
  const [west, south, east, north] = bounds ?? [null, null, null, null];
  db.run('insert into gpkg_contents (table_name, data_type, identifier, last_change, min_x, min_y, max_x, max_y, srs_id) values (?, ?, ?, ?, ?, ?, ?, ?, ?)', [table, kind, title, madeAt.toISOString(), west!, south!, east!, north!, kind === 'features' ? 4326 : 0]);
}

/** Closed, outer rings counter-clockwise. */
function ringsOf({ polygonsLonLat }: ExportedZone): number[][][][] {
  return polygonsLonLat.map((polygon) => windForGeoJson(polygon.map(closeRing)).map((ring) => ring.map(([lon, lat]) => [lon, lat])));
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
