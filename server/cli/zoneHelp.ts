/** What `npm run zone -- --help` prints. */

export const MORE = 'npm run zone -- --help lists all options.';

interface Names {
  readonly layers: readonly string[];
  readonly indices: readonly string[];
}

export function helpText({ layers, indices }: Names): string {
  return `Zones of one block from files, without server or database.

  npm run zone -- --block FILE --layer TYPE=FILE[#option=value,…] [--layer …] --out FILE [options]

  --block FILE              outline: GeoJSON, zipped shapefile, GeoPackage, KML or GPX
  --layer TYPE=FILE         once a layer. TYPE is one of ${layers.join(', ')},
                            or an index: ${indices.join(', ')}
  --out FILE                zones as GeoJSON, in degrees (WGS 84)
  --report FILE             everything found, as JSON
  --readings FILE           table of fruit readings that test the zones
  --zones advise|1…6        number of zones (advise)
  --layer-weights advise|equal   (advise)
  --cell METRES             0.25 to 100 (2)
  --min-patch-ha HA         smallest patch, 0 to 100 (what suits the block)
  --smooth METRES           radius, 0 to 50 (3)
  --standardise plain|robust     (plain)
  --components              principal components, for layers that repeat each other
  --seed N                  the same seed gives the same zones to the byte (1)
  --help

Behind a file, after #:
  pictures    band=1, or the bands of an index such as red=1,nir=2; nodata=NUMBER|none; as=classes
  tables      value=COLUMN, lat=COLUMN, lon=COLUMN; surface=distance|kriging
  shapes      field=NAME, layer=NAME, as=classes
  any layer   unit=UNIT, weight=NUMBER, epsg=CODE

  npm run zone -- --block block.geojson --layer "ndvi=drone.tif#red=1,nir=2" --layer "conductivity=survey.csv#value=ec" --out zones.geojson --report report.json

Ends with 0 when done, 2 when something given cannot be used (one line on standard error, nothing written), 1 through a fault of the program.`;
}
