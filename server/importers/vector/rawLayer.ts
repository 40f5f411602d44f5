import type { Geometry } from 'geojson';

/** A layer as a format's reader finds it, in the coordinates of the file. */
export interface RawLayer {
  name: string;
  features: readonly RawFeature[];
}

export interface RawFeature {
  geometry: Geometry | null;
  properties: Readonly<Record<string, unknown>>;
}
