import type { Language } from '../../../shared/contracts/common.ts';

/** A text that stands cut in a table, by its line and column. */
export interface CutText {
  readonly line: number;
  readonly column: string;
  readonly whole: string;
}

const words: Readonly<Record<Language, { about: string; line: string }>> = {
  en: { about: 'A field of a shapefile holds 254 bytes of text. These texts were cut in its table and stand here whole:', line: 'line' },
  es: { about: 'Un campo de un shapefile admite 254 bytes de texto. Estos textos se cortaron en su tabla y están aquí enteros:', line: 'línea' },
  fr: { about: 'Un champ de shapefile contient 254 octets de texte. Ces textes ont été coupés dans sa table et figurent ici en entier :', line: 'ligne' },
  it: { about: 'Un campo di uno shapefile contiene 254 byte di testo. Questi testi sono stati tagliati nella sua tabella e stanno qui per intero:', line: 'riga' },
  pt: { about: 'Um campo de um shapefile leva 254 bytes de texto. Estes textos foram cortados na sua tabela e estão aqui inteiros:', line: 'linha' },
};

/** What lies beside a shapefile whose table could not hold its texts. */
export function cutNotes(cut: readonly CutText[], language: Language): string {
  const { about, line: word } = words[language];
  return `\uFEFF${about}\r\n\r\n${cut.map(({ line, column, whole }) => `${word} ${line}, ${column}: ${whole}\r\n`).join('')}`;
}
