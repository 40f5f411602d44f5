import { boundsOf } from '../../../shared/geo/bounds.ts';
import type { Bounds, LonLat, MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';

/** Shapes of one kind with a table beside them: what the writers of GeoJSON, shapefile, KML and GeoPackage are given. WGS 84. */
export interface FeatureLayer {
  /** Name of the table or file, a lower-case word. */
  readonly name: string;
  readonly title: string;
  readonly fields: readonly FeatureField[];
  readonly features: readonly ExportedFeature[];
  readonly madeAt: Date;
}

export interface FeatureField {
  /** At most ten letters, so that a shapefile holds it whole. */
  readonly name: string;
  readonly type: 'text' | 'integer' | 'real';
  /** Digits after the point of a real. */
  readonly decimals?: number;
}

export interface ExportedFeature {
  /** One for each field, in their order. */
  readonly values: readonly (string | number | null)[];
  readonly shape: FeatureShape;
}

export type FeatureShape =
  | { readonly kind: 'polygons'; readonly polygonsLonLat: MultiPolygonLonLat }
  | { readonly kind: 'lines'; readonly linesLonLat: readonly (readonly LonLat[])[] }
  | { readonly kind: 'point'; readonly at: LonLat };

/** All positions of a shape, ring by ring or line by line. */
export function pathsOf(shape: FeatureShape): readonly (readonly LonLat[])[] {
  if (shape.kind === 'point') return [[shape.at]];
  return shape.kind === 'lines' ? shape.linesLonLat : shape.polygonsLonLat.flat();
}

export function layerBounds({ features }: FeatureLayer): Bounds {
  return boundsOf(features.flatMap(({ shape }) => pathsOf(shape)));
}
