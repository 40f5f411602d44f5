import { expect, it } from 'vitest';
import { Paper } from '../../server/exporters/paper.ts';
import { readPdf } from './pdfText.ts';

it('breaks no line before a sign that French sets apart, nor inside its quotation marks', async () => {
  const begins: string[] = [];
  for (let width = 60; width <= 200; width += 5) {
    const paper = new Paper({ face: 'report' });
    paper.text('Ces zones ont été modifiées à la main ; ce qui est dit du pourquoi vaut : « zones calculées » ! Et après ?', 50, 50, { width });
    begins.push(...readPdf(await paper.toBytes()).flatMap(({ texts }) => texts.map((text) => text.trim())));
  }
  expect(begins.length).toBeGreaterThan(100);
  expect(begins.filter((line) => /^[;:!?»]|«$/u.test(line))).toEqual([]);
});

it.each(['report', 'sheet'] as const)('puts one question mark for what a reader takes for one character, in the face of a %s', async (face) => {
  const printed = async (text: string) => {
    const paper = new Paper({ face });
    paper.text(text, 50, 50, { width: 400 });
    return readPdf(await paper.toBytes())[0]!.texts.join('').trim();
  };
  const [family, thumb, flag] = ['👨‍👩‍👧‍👦', '👍🏽', '🇵🇹'];
  expect(await printed(`Rows of ${family} and ${thumb}${flag}.`)).toBe('Rows of ? and ??.');
  expect(await printed('葡萄 नि')).toBe('?? ?');
  // A letter keeps its place when what is set on it cannot be shown: a keycap, an enclosing circle.
  expect(await printed('1️⃣ a⃝ Ḁ')).toMatch(/^1 a [AḀ]$/u);
  expect(await printed('Côte d’Été, Žižkov, Ελιά, Лоза')).toBe('Côte d’Été, Žižkov, Ελιά, Лоза');
});
