import type { ImportNote, ImportQuestion, UnderstoodFile } from '../../shared/contracts/imports.ts';
import { understandFile } from '../importers/formats.ts';
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
  return {
    format: formatOf(understood),
    file: summaryOf(understood),
    questions: understood.questions.flatMap((question) => readerQuestionsOf(question, source.answers)),
    // The reader offers a repair shape by shape; here all are taken, so one note says so.
    notes: [...understood.warnings.filter((warning) => warning.code !== 'self-crossing').map(noteOf), ...repairNotes(understood)],
  };
}

function repairNotes(understood: Awaited<ReturnType<typeof understandFile>>): ImportNote[] {
  if (understood.kind !== 'vector' || understood.repairs.length === 0) return [];
  const { repairs } = understood;
  const [first] = repairs;
  return [
    {
      code: 'shapes-cross',
      text: `${repairs.length} of its shapes ${repairs.length === 1 ? 'crosses itself' : 'cross themselves'}, the first near ${first!.placeLonLat[1].toFixed(5)}, ${first!.placeLonLat[0].toFixed(5)} (latitude, longitude): repaired, ${first!.areaBeforeHa.toFixed(2)} ha become ${first!.areaAfterHa.toFixed(2)} ha.`,
      params: { shapes: repairs.length, lon: first!.placeLonLat[0], lat: first!.placeLonLat[1], beforeHa: first!.areaBeforeHa, afterHa: first!.areaAfterHa },
    },
  ];
}
