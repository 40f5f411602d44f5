import { EstateModel } from './BaseModel.ts';

/** What the person at the row said of a bag. */
export interface BagFacts {
  berries: number | null;
  sunSide: number | null;
  shadeSide: number | null;
  wet: boolean | null;
  rotPercent: number | null;
  note: string;
}

/** A vine whose fruit is in the bag. */
export interface BagVine {
  rowId: string;
  ordinal: number;
}

/** A closing of a bag, with the label that it carries. Figures of the lab follow the label, what was seen at the row follows the closing. */
export class Bag extends EstateModel {
  static override tableName = 'bags';
  static override jsonAttributes = ['facts', 'vines'];

  declare code: string;
  /** The code as the phone sent it: a label may be exchanged later. */
  declare sentCode: string | null;
  declare roundId: string | null;
  declare blockId: string | null;
  declare zoneId: string | null;
  declare vines: BagVine[];
  declare state: 'printed' | 'closed' | 'received' | 'void';
  declare facts: Partial<BagFacts>;
  declare closedBy: string | null;
  declare closedAt: Date | null;
  declare deviceId: string | null;
  declare deviceTime: Date | null;
  declare receivedBy: string | null;
  declare receivedAt: Date | null;
  declare missingAt: Date | null;
  declare missingBy: string | null;
  declare swappedAt: Date | null;
  /** The bag that had this label first; null for a bag whose label is its own. */
  declare clashesWith: string | null;
  declare createdAt: Date;
}
