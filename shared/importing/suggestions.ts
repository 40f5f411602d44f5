import type { BandName } from '../analysis/indices.ts';
import type { FieldSummary, ImportPurpose, UnderstoodFile } from '../contracts/imports.ts';

/** Guesses from names, offered to the person who answers. Words of the five languages of the program. */

const purposeWords: readonly (readonly [ImportPurpose, RegExp])[] = [
  ['elevation', /\b(dem|dtm|dsm|mdt|mnt|elev|alti|height|relief|quota|cota)/],
  ['vigour', /(ndvi|gndvi|ndre|vigo|pcd|msavi|osavi|savi|multispec|bands?\b)/],
  ['conductivity', /(\bec\b|\beca\b|conduct|conduc|\bems?\b|ms m\b|ds m\b)/],
  ['yield', /(yield|rendim|rendem|resa\b|produ[cz])/],
  ['soil', /(soil|suelo|\bsol\b|suolo|\bsolo\b|texture|textur|\bawc\b|clay|argil)/],
  ['rows', /\b(rows?|rangs?|hileras?|filas?|filari|fileiras?|linhas?|bardos?)\b/],
  ['boundary', /(bound|outline|block|parcel|parcela|limit|contour|confin|perim|talh)/],
];

/** What the file's name speaks of, else what its kind leaves open. */
export function suggestPurpose(file: UnderstoodFile, fileName: string): ImportPurpose | null {
  const name = plain(fileName);
  const named = purposeWords.find(([, words]) => words.test(name))?.[0] ?? null;
  if (file.kind === 'raster') return named === 'boundary' || named === 'rows' ? null : (named ?? (file.bands.length >= 3 ? 'vigour' : null));
  return named;
}

/** The index that the name of a single-band picture speaks of. */
export function suggestIndex(fileName: string): string | null {
  const name = plain(fileName);
  return ['gndvi', 'ndvi', 'ndre', 'msavi2', 'osavi', 'savi'].find((index) => name.includes(index)) ?? (/\bpcd\b|ratio/.test(name) ? 'ratio' : null);
}

const bandWords: Record<BandName, RegExp> = { nir: /\bnir\b|near.?infra/, red: /^(?!.*edge).*\bred\b/, green: /\bgreen\b/, redEdge: /red.?edge/ };

/** The band whose own description or colour says that it is this one. */
export function suggestBand(file: UnderstoodFile, band: BandName): number | null {
  if (file.kind !== 'raster') return null;
  return file.bands.find(({ description, colour }) => bandWords[band].test(plain(description ?? colour ?? '')))?.index ?? null;
}

const valueWords: Partial<Record<ImportPurpose, RegExp>> = {
  conductivity: /\bec|\beca|cond|ms m/,
  yield: /yield|rend|resa|prod|kg|t ha/,
  elevation: /elev|alt|height|\bz\b|quota|cota/,
  vigour: /ndvi|ndre|vigo|pcd/,
  soil: /soil|suelo|sol|awc|clay|text|class/,
};

/** The only field there is, or the only one whose name speaks of the purpose. */
export function suggestValueField(fields: readonly FieldSummary[], purpose: ImportPurpose | undefined): string | null {
  if (fields.length === 1) return fields[0]!.name;
  const words = purpose === undefined ? undefined : valueWords[purpose];
  const fitting = words === undefined ? [] : fields.filter((field) => words.test(plain(field.name)));
  return fitting.length === 1 ? fitting[0]!.name : null;
}

/** The field that looks like names of blocks: so called, or text that is different on every outline. */
export function suggestNameField(fields: readonly FieldSummary[]): string | null {
  const named = fields.find((field) => /^(name|nom|nombre|nome|block|bloque|parcela|parcelle|label)/.test(plain(field.name)));
  return (named ?? fields.find((field) => field.kind === 'text' && field.missing === 0 && field.distinct > 1))?.name ?? null;
}

/** The field that looks like labels of rows: so called, or the only one. */
export function suggestRowField(fields: readonly FieldSummary[]): string | null {
  const named = fields.find((field) => /^(row|rang|hilera|fila|filare|fileira|linha|bardo|label|num|nr|no)\b/.test(plain(field.name)));
  return named?.name ?? (fields.length === 1 ? fields[0]!.name : null);
}

/** A unit written in the name of a column, such as "EC (mS/m)" or "ec_deep_mS_m". */
export function unitInName(name: string, units: readonly string[]): string | null {
  const letters = (text: string) => text.normalize('NFD').replace(/[^\p{L}]/gu, '').toLowerCase().replace('μ', 'µ');
  return units.find((unit) => unit.length > 2 && letters(name).endsWith(letters(unit))) ?? null;
}

/** A day written in a name as 2025-07-14, 2025_07_14 or 20250714; null when it is no day. */
export function dateInName(name: string): string | null {
  const found = /(?<!\d)((?:19|20)\d\d)[-_.]?(0[1-9]|1[0-2])[-_.]?(0[1-9]|[12]\d|3[01])(?!\d)/.exec(name);
  if (!found) return null;
  const [year, month, day] = [Number(found[1]), Number(found[2]), Number(found[3])];
  const daysInMonth = new Date(Date.UTC(year, month, 0)).getUTCDate();
  return day <= daysInMonth ? `${found[1]}-${found[2]}-${found[3]}` : null;
}

function plain(text: string): string {
  return text.normalize('NFD').replace(/\p{M}/gu, '').toLowerCase().replace(/[_.-]+/g, ' ');
}
