/** EPSG code, name, proj4 text without the unit where it is the metre. */
export type GridRow = readonly [epsg: number, name: string, definition: string];
