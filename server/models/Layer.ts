import type { ImportAnswers } from '../../shared/contracts/imports.ts';
import type { LayerClass } from '../../shared/contracts/layers.ts';
import type { LayerTypeId } from '../../shared/catalog/layerTypes.ts';
import { EstateModel } from './BaseModel.ts';

/** Where a layer came from and how it was understood; printed on reports. */
export interface LayerSource {
  fileName: string | null;
  sha256: string | null;
  /** Index, band or field that the values are. */
  value: string | null;
  pixelSizeM: number | null;
  reference: string | null;
  answers: ImportAnswers;
}

export class Layer extends EstateModel {
  static override tableName = 'layers';
  static override jsonAttributes = ['source', 'classes'];

  declare importId: string | null;
  declare derivedFrom: string | null;
  declare type: LayerTypeId;
  declare name: string;
  declare unit: string;
  declare measuredOn: string | null;
  declare source: Partial<LayerSource>;
  declare classes: LayerClass[] | null;
  declare retiredAt: Date | null;
  declare createdBy: string | null;
  declare createdAt: Date;
}
