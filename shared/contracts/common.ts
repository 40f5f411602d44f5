import { z } from 'zod';

/** Shapes that several contracts use. */
export const id = z.uuid();
export const isoDate = z.iso.date();
export const isoTime = z.iso.datetime({ offset: true });
export const languages = ['en', 'es', 'fr', 'it', 'pt'] as const;
export const language = z.enum(languages);
export type Language = z.infer<typeof language>;
export const units = z.enum(['metric', 'us']);
export const themes = z.enum(['system', 'light', 'dark', 'outdoor']);

/** A password as somebody chooses it. */
export const newPassword = z.string().min(10, 'A password needs at least 10 characters.').max(200);

/** Name typed by a person: trimmed, not empty, one line. */
export const shortName = z.string().trim().min(1, 'Give a name.').max(80, 'At most 80 characters.').regex(/^[^\r\n\t]*$/, 'One line only.');

const position = z.tuple([z.number().min(-180).max(180), z.number().min(-90).max(90)]).rest(z.number());
const ring = z.array(position).min(4, 'A ring needs at least four positions.');

export const pointGeometry = z.object({ type: z.literal('Point'), coordinates: position });
export const polygonGeometry = z.object({ type: z.literal('Polygon'), coordinates: z.array(ring).min(1) });
export const multiPolygonGeometry = z.object({ type: z.literal('MultiPolygon'), coordinates: z.array(z.array(ring).min(1)).min(1) });
export const areaGeometry = z.discriminatedUnion('type', [polygonGeometry, multiPolygonGeometry]);
export const lineGeometry = z.object({ type: z.literal('LineString'), coordinates: z.array(position).min(2) });

/** Longitude and latitude in degrees, WGS 84. */
export const lonLat = z.tuple([z.number().min(-180).max(180), z.number().min(-90).max(90)]);

type Changes<Shape extends z.ZodRawShape> = { [Key in keyof Shape]: z.ZodOptional<Shape[Key] extends z.ZodDefault<infer Inner> ? Inner : Shape[Key]> };

/** Any of the fields of an object and nothing of the rest: unlike with `partial()`, a field that was not sent is not filled with its starting value. */
export function changesOf<Shape extends z.ZodRawShape>(whole: z.ZodObject<Shape>): z.ZodObject<Changes<Shape>> {
  const fields = Object.entries(whole.shape).map(([key, field]) => [key, z.optional(field instanceof z.ZodDefault ? field.unwrap() : field)]);
  return z.object(Object.fromEntries(fields) as Changes<Shape>);
}
