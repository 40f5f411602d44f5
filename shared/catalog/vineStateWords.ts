import type { VineState } from '../contracts/rows.ts';

type Marked = VineState | 'living';

/** Words for a vine's state that a typed or pasted table may use, in the languages of the program. Accents and case do not matter. */
const words: readonly (readonly [Marked, readonly string[]])[] = [
  ['missing', ['missing', 'miss', 'm', 'marra', 'manquant', 'fallanza', 'falha']],
  ['dead', ['dead', 'd', 'muerta', 'muerto', 'mort', 'morte', 'morto', 'morta']],
  ['replant', ['replant', 'young replant', 'r', 'reposicion', 'complant', 'rimpiazzo', 'retancha']],
  ['offType', ['offtype', 'off-type', 'off type', 'other', 'other variety', 'o', 'otra variedad', 'hors type', 'autre cepage', 'fuori tipo', 'altro vitigno', 'outra casta']],
  ['sick', ['sick', 's', 'enferma', 'malade', 'malato', 'doente']],
  ['living', ['living', 'alive', 'l', 'viva', 'vivant', 'vivo', 'ok']],
];

const byWord = new Map(words.flatMap(([state, known]) => known.map((word) => [word, state] as const)));

/** The state that a word means, or null. `vineStateOf('Reposición')` is 'replant'. */
export function vineStateOf(word: string): Marked | null {
  const plain = word.normalize('NFD').replace(/\p{M}/gu, '').trim().toLowerCase();
  return byWord.get(plain) ?? null;
}
