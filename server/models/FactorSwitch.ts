import { EstateModel } from './BaseModel.ts';

export class FactorSwitch extends EstateModel {
  static override tableName = 'factor_switches';

  declare kind: 'growth' | 'losses' | 'mustL' | 'wineL' | 'tankOffset';
  declare about: string;
  declare isOn: boolean;
  declare setBy: string;
  declare setAt: Date;
}
