import type { ImportQuestion, ImportWarning, QuestionReason, ReferenceSystem } from '../understood.ts';
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

/** What a reader made of a file before its shapes are judged. */
export interface LayersRead {
  layers: readonly RawLayer[];
  reference: ReferenceSystem | null;
  /** Why the system is missing; null where it is known. */
  whyNoReference: QuestionReason | null;
  warnings: ImportWarning[];
  questions?: ImportQuestion[];
}
