import { ref, type Ref } from 'vue';
import type { ImportAnswers, ImportView } from '../../shared/contracts/imports.ts';
import type { OutlineGeometry } from '../../shared/geo/outline.ts';
import { HttpProblem } from '../lib/httpProblem.ts';

export type FileOutcome = { kind: 'outline'; geometry: OutlineGeometry; name: string; importId: string } | { kind: 'asks'; importId: string } | { kind: 'refused'; text: string };

interface Door {
  send: (file: File) => Promise<ImportView[]>;
  answer: (importId: string, answers: ImportAnswers) => Promise<ImportView>;
}

/** An outline file for one block. Whatever needs more than one outline or an answer goes on at the import desk. */
export function useOutlineFile({ send, answer }: Door): { isBusy: Ref<boolean>; read: (file: File) => Promise<FileOutcome> } {
  const isBusy = ref(false);

  async function outcome(file: File): Promise<FileOutcome> {
    const [line] = await send(file);
    if (!line || line.state === 'refused') return { kind: 'refused', text: line?.problem?.text ?? '' };
    const mayBe = line.questions.find((question) => question.code === 'purpose')?.choices.some((choice) => choice.value === 'boundary');
    if (!mayBe) return { kind: 'asks', importId: line.id };
    const name = line.questions.find((question) => question.code === 'nameField');
    const asked = await answer(line.id, { purpose: 'boundary', ...(name ? { nameField: (name.suggestion as string | null) ?? null } : {}) });
    const named = asked.state === 'asks' ? await answer(line.id, { nameField: (asked.questions.find((question) => question.code === 'nameField')?.suggestion as string | null) ?? null }) : asked;
    const [only, ...more] = named.outlines;
    if (named.state !== 'ready' || !only || more.length > 0 || only.problem !== null) return { kind: 'asks', importId: line.id };
    return { kind: 'outline', geometry: only.boundary as OutlineGeometry, name: only.name, importId: line.id };
  }

  return {
    isBusy,
    read: async (file) => {
      isBusy.value = true;
      try {
        return await outcome(file);
      } catch (error) {
        if (!(error instanceof HttpProblem)) throw error;
        return { kind: 'refused', text: error.message };
      } finally {
        isBusy.value = false;
      }
    },
  };
}
