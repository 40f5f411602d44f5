declare module 'shpjs' {
  /** Shapes of a .shp file in file order; null for an empty shape. */
  export function parseShp(shp: DataView, prj?: string): unknown[];
}
