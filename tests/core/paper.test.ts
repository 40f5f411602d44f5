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
