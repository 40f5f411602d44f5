import { z } from 'zod';
import { areaGeometry, id, isoDate, multiPolygonGeometry, pointGeometry, shortName } from './common.ts';
import { rowOneSide, vineCounts, vineOneEnd } from './rows.ts';

/** Colours of end posts that crews can name; the screen draws them as they are. */
export const postColours = ['white', 'red', 'blue', 'green', 'yellow', 'orange', 'black', 'grey', 'violet', 'brown'] as const;
export const postColour = z.enum(postColours);
export type PostColour = z.infer<typeof postColour>;

const text = (most: number) => z.string().trim().max(most);
const thisCenturyAndBefore = z.number().int().min(1850).max(2200);

const facts = {
  variety: text(80),
  rootstock: text(80),
  plantedYear: thisCenturyAndBefore.nullable(),
  /** Planted area in the estate's own book, kept beside the drawn one. */
  bookAreaHa: z.number().positive().max(1000).nullable(),
  /** Vines stand without rows, or nobody knows them: lines along the direction only number places, which are found by coordinates. */
  withoutRows: z.boolean(),
  /** Clockwise from true north; 210 and 30 are the same rows. */
  rowBearingDeg: z.number().min(0).lt(360),
  rowSpacingM: z.number().min(0.5).max(12),
  vineSpacingM: z.number().min(0.2).max(12),
  /** Rows counted in the field; overrides the row spacing. */
  rowCount: z.number().int().min(1).max(20_000).nullable(),
  headlandM: z.number().min(0).max(50),
  rowOneSide,
  vineOneEnd,
  firstRowLabel: z.number().int().min(0).max(100_000),
  startPostColour: postColour,
  endPostColour: postColour,
  gate: pointGeometry.nullable(),
  cellSizeM: z.number().min(0.5).max(30),
  trellis: text(120),
  notes: text(4000),
};

export const newBlock = z.object({
  name: shortName,
  boundary: areaGeometry,
  variety: facts.variety.default(''),
  rootstock: facts.rootstock.default(''),
  plantedYear: facts.plantedYear.default(null),
  bookAreaHa: facts.bookAreaHa.default(null),
  withoutRows: facts.withoutRows.default(false),
  rowBearingDeg: facts.rowBearingDeg.default(0),
  rowSpacingM: facts.rowSpacingM.default(2.5),
  vineSpacingM: facts.vineSpacingM.default(1.2),
  rowCount: facts.rowCount.default(null),
  headlandM: facts.headlandM.default(0),
  rowOneSide: facts.rowOneSide.default('low'),
  vineOneEnd: facts.vineOneEnd.default('start'),
  firstRowLabel: facts.firstRowLabel.default(1),
  startPostColour: facts.startPostColour.default('white'),
  endPostColour: facts.endPostColour.default('red'),
  gate: facts.gate.default(null),
  cellSizeM: facts.cellSizeM.default(2),
  trellis: facts.trellis.default(''),
  notes: facts.notes.default(''),
});
export type NewBlock = z.infer<typeof newBlock>;
export type NewBlockInput = z.input<typeof newBlock>;

/** `rowsMayGo`: somebody has been told what building the rows anew loses, and wants it. */
export const blockChange = z.object({ name: shortName, boundary: areaGeometry, ...facts, rowsMayGo: z.boolean() }).partial();
export type BlockChange = z.infer<typeof blockChange>;

/** Noticed about an outline that can be used all the same. */
export const blockWarning = z.discriminatedUnion('code', [
  z.object({ code: z.literal('overlaps'), block: z.string(), blockId: id, areaHa: z.number() }),
  z.object({ code: z.literal('farFromEstate'), distanceKm: z.number() }),
  z.object({ code: z.literal('bookDiffers'), bookAreaHa: z.number(), drawnAreaHa: z.number() }),
  z.object({ code: z.literal('noRows') }),
  z.object({ code: z.literal('rowSpacingImplied'), typedM: z.number(), impliedM: z.number() }),
  z.object({ code: z.literal('rowCountNotReached'), typed: z.number(), laid: z.number() }),
  z.object({ code: z.literal('tidied'), what: z.enum(['closed', 'repeatedCorners', 'heights']), count: z.number().int() }),
]);
export type BlockWarning = z.infer<typeof blockWarning>;

/** What an outline comes to, before anything is saved. */
export const outlineCheck = z.object({ areaHa: z.number(), epsg: z.number().int(), boundary: multiPolygonGeometry, warnings: z.array(blockWarning) });
export type OutlineCheck = z.infer<typeof outlineCheck>;
export const outlineToCheck = z.object({ boundary: areaGeometry, blockId: id.nullable().default(null), bookAreaHa: facts.bookAreaHa.default(null) });

const liveZone = z.object({ id, number: z.number().int(), name: z.string(), colour: z.string().nullable(), areaHa: z.number(), geometry: multiPolygonGeometry });

const restrictionInForce = z.object({ id, startsAt: z.string(), endsAt: z.string(), product: z.string(), setBy: z.string(), rowIds: z.array(id).nullable() });
export type RestrictionInForce = z.infer<typeof restrictionInForce>;

/** One line of the estate's ledger. */
export const blockLine = z.object({
  id,
  name: z.string(),
  variety: z.string(),
  areaHa: z.number(),
  rowBearingDeg: z.number(),
  rowSpacingM: z.number(),
  cellSizeM: z.number(),
  rowTotal: z.number().int(),
  vines: vineCounts,
  boundary: multiPolygonGeometry,
  zoning: z.object({ id, name: z.string(), revision: z.number().int(), zones: z.array(liveZone) }).nullable(),
  layerTotal: z.number().int(),
  lastReadingAt: z.string().nullable(),
  nextRound: z.object({ id, onDate: isoDate, state: z.string(), late: z.boolean() }).nullable(),
  restriction: restrictionInForce.nullable(),
  noPickBefore: isoDate.nullable(),
  version: z.number().int(),
});
export type BlockLine = z.infer<typeof blockLine>;

export const blockView = z.object({
  id,
  name: z.string(),
  ...facts,
  boundary: multiPolygonGeometry,
  areaHa: z.number(),
  epsg: z.number().int(),
  gridKey: z.string(),
  rowTotal: z.number().int(),
  vines: vineCounts,
  restriction: restrictionInForce.nullable(),
  noPickBefore: isoDate.nullable(),
  version: z.number().int(),
  createdAt: z.string(),
  warnings: z.array(blockWarning),
});
export type BlockView = z.infer<typeof blockView>;

/** What a change of outline or planting did to rows and layers. */
export const rowEffects = z.object({ kept: z.number().int(), made: z.number().int(), retired: z.number().int(), marksLost: z.number().int() });
export type RowEffects = z.infer<typeof rowEffects>;

/** What building rows anew would cost: a survey, rows that readings, targets or lots refer to, marks of vines. */
export interface RowsAtStake extends RowEffects {
  surveyed: boolean;
  referred: number;
}

/** The block as it is now, with what the change did; `jobId` follows layers being placed again. */
export const changedBlock = z.object({ ...blockView.shape, rowEffects: rowEffects.nullable(), jobId: id.nullable() });
export type ChangedBlock = z.infer<typeof changedBlock>;
