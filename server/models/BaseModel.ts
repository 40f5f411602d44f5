import { Model } from 'objection';

/** Every table has a uuid key made by the database. Fields are `declare`d: an initialiser would end up in patches. */
export class BaseModel extends Model {
  declare id: string;
}

/** Base of the tables below an estate. Queries always name the estate. */
export class EstateModel extends BaseModel {
  declare estateId: string;
}
