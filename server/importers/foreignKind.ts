/** The kind of file that somebody sent by mistake, by its name in our sentences; screens have words for each kind. */
export function foreignKind(name: string): 'is-picture' | 'is-document' | 'is-program' | 'is-archive' | 'is-page' | 'is-other-map' | 'is-misnamed' | 'is-unknown' {
  if (/beginning is damaged/.test(name)) return 'is-misnamed';
  if (/picture \(VRT\)|Imagine|ENVI/.test(name)) return 'is-other-map';
  if (/picture/.test(name)) return 'is-picture';
  if (/document/.test(name)) return 'is-document';
  if (/program|script/.test(name)) return 'is-program';
  if (/archive/.test(name)) return 'is-archive';
  if (/web page/.test(name)) return 'is-page';
  return /HDF5|NetCDF|GRIB|FlatGeobuf|Parquet|Arrow|point cloud|grid|MapInfo|DXF|GML|OpenStreetMap|geodatabase/.test(name) ? 'is-other-map' : 'is-unknown';
}
