import type { AsideReading, LayerFinding, LayerStatistics, LayerSurvey } from '../../shared/contracts/layers.ts';
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
  static override jsonAttributes = ['statistics', 'findings', 'override', 'survey'];

  declare layerId: string;
  declare blockId: string;
  declare gridKey: string;
  declare cells: Buffer;
  declare coverage: number;
  declare statistics: LayerStatistics;
  declare findings: LayerFinding[];
  /** Places of the findings as a layer's cells are stored, a bit each; null where none has one. */
  declare marks: Buffer | null;
  declare override: LayerOverride | null;
  declare survey: (LayerSurvey & { aside: AsideReading[] }) | null;
  declare createdAt: Date;
}
