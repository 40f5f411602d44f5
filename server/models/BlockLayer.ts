import type { LayerFinding, LayerStatistics } from '../../shared/contracts/layers.ts';
import { EstateModel } from './BaseModel.ts';

/** Who answers for using a layer with red findings, and why. */
export interface LayerOverride {
  personId: string;
  by: string;
  reason: string;
  at: string;
}

export class BlockLayer extends EstateModel {
  static override tableName = 'block_layers';
  static override jsonAttributes = ['statistics', 'findings', 'override'];

  declare layerId: string;
  declare blockId: string;
  declare gridKey: string;
  declare cells: Buffer;
  declare coverage: number;
  declare statistics: LayerStatistics;
  declare findings: LayerFinding[];
  declare override: LayerOverride | null;
  declare createdAt: Date;
}
