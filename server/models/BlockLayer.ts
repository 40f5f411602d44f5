import { EstateModel } from './BaseModel.ts';

export class BlockLayer extends EstateModel {
  static override tableName = 'block_layers';
  static override jsonAttributes = ['statistics', 'findings', 'override'];

  declare layerId: string;
  declare blockId: string;
  declare gridKey: string;
  declare cells: Buffer;
  declare coverage: number;
  declare statistics: unknown;
  declare findings: unknown;
  declare override: unknown;
  declare createdAt: Date;
}
