import { z } from 'zod';
import { confidences, rowSides } from '../catalog/measures.ts';
import { id } from './common.ts';

export const confidence = z.literal(confidences);
export const rowSide = z.enum(rowSides);
export const marginKind = z.enum(['absolute', 'relative']);

const positive = z.number().positive();

const facts = {
  unit: z.string().trim().min(1, 'Give a unit.').max(20),
  decimals: z.number().int().min(0).max(4),
  minimum: z.number(),
  maximum: z.number(),
  marginKind,
  /** In the unit when absolute; a share when relative: 0.1 is ten percent of the mean. */
  margin: positive,
  confidence,
  sampledUnit: z.enum(['vine', 'cluster', 'berryLot']),
  spreadKind: z.enum(['sd', 'cv']),
  spreadValue: positive,
  spreadSource: z.string().trim().min(1, 'Say where this spread comes from.').max(200),
  typicalMean: z.number(),
  secondsPerSample: z.number().min(0).max(7200),
  weighting: z.enum(['vines', 'mass']),
  skewed: z.boolean(),
  measuredIn: z.enum(['field', 'lab']),
  rowSide,
  inUse: z.boolean(),
};

export const measureView = z.object({ id, code: z.string(), name: z.string(), ...facts });
export type MeasureView = z.infer<typeof measureView>;

const inOrder = (measure: { minimum?: number | undefined; maximum?: number | undefined }) => measure.minimum === undefined || measure.maximum === undefined || measure.maximum > measure.minimum;
const inOrderMessage = { message: 'The highest plausible value must be above the lowest.', path: ['maximum'] };

/** A measure the estate makes for itself. */
export const newMeasure = z
  .object({
    name: z.string().trim().min(1, 'Give the measure a name.').max(60),
    ...facts,
    confidence: confidence.default(0.95),
    sampledUnit: facts.sampledUnit.default('vine'),
    decimals: facts.decimals.default(1),
    secondsPerSample: facts.secondsPerSample.default(60),
    weighting: facts.weighting.default('vines'),
    skewed: facts.skewed.default(false),
    measuredIn: facts.measuredIn.default('field'),
    rowSide: rowSide.default('either'),
    inUse: facts.inUse.default(true),
  })
  .refine(inOrder, inOrderMessage);
export type NewMeasure = z.infer<typeof newMeasure>;

export const measureChange = z.object({ name: z.string().trim().max(60), ...facts }).partial().refine(inOrder, inOrderMessage);
export type MeasureChange = z.infer<typeof measureChange>;
