/** Which columns hold the position. */

export interface PositionColumns {
  /** Index of the column of longitude or easting, and of latitude or northing. */
  x: number;
  y: number;
  /** What the names say: angles, or distances in some map projection. */
  frame: 'lonlat' | 'projected';
}

const latitude = /^(gps[ _-]?)?(lat|latitude|latitud|latitudine|breite|breitengrad)([ _-]?(wgs ?84|dd|deg|degrees|gps|\(.*\)|°))*$/i;
const longitude = /^(gps[ _-]?)?(lon|lng|long|longitude|longitud|longitudine|laenge|länge|längengrad|laengengrad)([ _-]?(wgs ?84|dd|deg|degrees|gps|\(.*\)|°))*$/i;
const easting = /^(x|e|east|easting|eastings|rechtswert|ostwert|este|est|xcoord|x[ _-]?coord(inate)?|coord[ _-]?x|utm[ _-]?[ex]|x[ _-]?utm|point[ _-]?x)([ _-]?(m|\(.*\)))?$/i;
const northing = /^(y|n|north|northing|northings|hochwert|nordwert|norte|nord|ycoord|y[ _-]?coord(inate)?|coord[ _-]?y|utm[ _-]?[ny]|y[ _-]?utm|point[ _-]?y)([ _-]?(m|\(.*\)))?$/i;

/** By name; the person's choice goes before. Null when the names do not tell. */
export function findPositionColumns(names: readonly string[], answers: { xColumn?: string; yColumn?: string } | undefined): PositionColumns | null {
  const chosenX = answers?.xColumn === undefined ? -1 : names.indexOf(answers.xColumn);
  const chosenY = answers?.yColumn === undefined ? -1 : names.indexOf(answers.yColumn);
  const find = (pattern: RegExp): number => names.findIndex((name) => pattern.test(name.trim()));
  const [lon, lat] = [find(longitude), find(latitude)];
  if (chosenX >= 0 && chosenY >= 0) return { x: chosenX, y: chosenY, frame: chosenX === lon ? 'lonlat' : 'projected' };
  if (lon >= 0 && lat >= 0) return { x: lon, y: lat, frame: 'lonlat' };
  const [x, y] = [find(easting), find(northing)];
  return x >= 0 && y >= 0 ? { x, y, frame: 'projected' } : null;
}
