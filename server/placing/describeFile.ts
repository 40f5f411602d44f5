import type { ImportNote, ImportQuestion, UnderstoodFile } from '../../shared/contracts/imports.ts';
import { understandFile } from '../importers/formats.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import type { SourceFile } from './placed.ts';
import { formatOf, noteOf, readerQuestionsOf, readOptionsOf, summaryOf } from './sourceFile.ts';

/** What was understood of a file, small enough to keep beside it. */
export interface Described {
  format: string;
  file: UnderstoodFile;
  /** What the reader itself must know before it can place the file. */
  questions: ImportQuestion[];
  notes: ImportNote[];
}

/** Reads a file far enough to say what it is. Throws ImportProblem when it cannot be used. */
export async function describeFile(source: SourceFile): Promise<Described> {
  const understood = await understandFile(source.path, readOptionsOf(source));
  requireValues(understood, source.fileName);
  return {
    format: formatOf(understood),
    file: summaryOf(understood),
    questions: understood.questions.flatMap((question) => readerQuestionsOf(question, source.answers)),
    // The reader offers a repair shape by shape; here all are taken, so one note says so.
    notes: [...understood.warnings.filter((warning) => warning.code !== 'self-crossing').map(noteOf), ...repairNotes(understood)],
  };
}

/** Points say nothing about the ground without a number each. */
function requireValues(understood: Awaited<ReturnType<typeof understandFile>>, file: string): void {
  if (understood.kind === 'raster' || understood.questions.some(({ code }) => code === 'columns' || code === 'layer' || code === 'decimal-mark')) return;
  const isPoints = understood.kind === 'points' || understood.layers.every(({ geometryKinds }) => geometryKinds.every((kind) => /Point$/.test(kind)));
  const fields = understood.kind === 'points' ? understood.columns.filter(({ name }) => name !== understood.position?.first && name !== understood.position?.second) : understood.layers.flatMap((layer) => layer.fields);
  if (!isPoints || fields.some(({ kind }) => kind === 'number') || (understood.kind === 'points' && understood.reference === null)) return;
  const listed = fields.slice(0, 6).map(({ name }) => name).join(', ').slice(0, 120);
  throw new ImportProblem({
    code: 'no-values',
    fact: `It holds points without a number to map${listed === '' ? '' : ` (it has ${listed})`}.`,
    remedy: 'Add a column with what was measured, such as conductivity.',
    params: { why: 'no-number', listed },
    file,
  });
}

function repairNotes(understood: Awaited<ReturnType<typeof understandFile>>): ImportNote[] {
  if (understood.kind !== 'vector') return [];
  const [mended, tangled] = [understood.repairs.filter(({ repaired }) => repaired !== null), understood.repairs.filter(({ repaired }) => repaired === null)];
  const notes: ImportNote[] = [];
  const [first] = mended;
  if (first) {
    notes.push({
      code: 'shapes-cross',
      text: `${mended.length} of its shapes ${mended.length === 1 ? 'crosses itself' : 'cross themselves'}, the first near ${placeWords(first)}: repaired, ${first.areaBeforeHa.toFixed(2)} ha become ${first.areaAfterHa.toFixed(2)} ha.`,
      params: { shapes: mended.length, lon: first.placeLonLat[0], lat: first.placeLonLat[1], beforeHa: first.areaBeforeHa, afterHa: first.areaAfterHa },
    });
  }
  if (tangled.length > 0) {
    notes.push({
      code: 'shapes-tangled',
      text: `${tangled.length} of its shapes ${tangled.length === 1 ? 'crosses itself and is' : 'cross themselves and are'} too tangled to be repaired, the first near ${placeWords(tangled[0]!)}: left out. Draw them again.`,
      params: { shapes: tangled.length, lon: tangled[0]!.placeLonLat[0], lat: tangled[0]!.placeLonLat[1] },
    });
  }
  return notes;
}

const placeWords = ({ placeLonLat: [lon, lat] }: { placeLonLat: readonly [number, number] }) => `${lat.toFixed(5)}, ${lon.toFixed(5)} (latitude, longitude)`;
