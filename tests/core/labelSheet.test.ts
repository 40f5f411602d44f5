import { describe, expect, it } from 'vitest';
import { labelSheet, type LabelFacts } from '../../server/exporters/labelSheet.ts';
import { readPdf } from './pdfText.ts';

const facts: LabelFacts = { block: 'Quinta da Ribeira de Cima e Baixo', date: '2 de dez. de 2026', zone: '12, Encosta do Moinho Velho', vine: { row: '118', number: 1204 }, stop: 118, measures: '°Brix, pH, acidez total, azoto assimilável', person: 'Maria da Conceição Figueiredo' };

describe('bag labels on paper', () => {
  it('never cut a code, a row or a vine, however long the words beside them', async () => {
    for (const paper of ['single', 'a4', 'letter'] as const) {
      const [page] = readPdf(await labelSheet([{ code: 'WMWMWM', facts }], { paper, language: 'pt', title: 'Labels' }));
      expect(page!.texts).toContain('WMW MWM');
      expect(page!.texts.join(' ')).toContain('Bardo 118  Cepa 1204');
    }
    const [whole] = readPdf(await labelSheet([{ code: 'WMWMWM', facts: { ...facts, vine: null } }], { paper: 'single', language: 'pt', title: 'Labels' }));
    expect(whole!.texts.join(' ')).toMatch(/Toda a zona, .* 118/u);
  });

  it('write names in the letters of their language, and say that a script is missing instead of printing nothing', async () => {
    const named = { ...facts, block: 'Łąka Ősi Čapek Şirin', zone: '2 Нижня', person: 'Γιώργος 日' };
    const [page] = readPdf(await labelSheet([{ code: 'ABCDEF', facts: { ...named, date: '2 déc.\u202F2026' } }], { paper: 'a4', language: 'fr', title: 'Labels' }));
    expect(page!.texts).toEqual(expect.arrayContaining(['Zone 2 Нижня', 'Łąka Ősi Čapek Şirin, 2 déc.\u00A02026', 'Arrêt 118, Γιώργος ?']));
  });

  it('are as many a page as the sheet has, one a page for a label printer', async () => {
    const labels = Array.from({ length: 15 }, () => ({ code: 'ABCDEF', facts: null }));
    const pagesOf = async (paper: 'single' | 'a4' | 'letter') => readPdf(await labelSheet(labels, { paper, language: 'en', title: 'Labels' }));
    expect((await pagesOf('a4')).map(({ texts }) => texts.filter((text) => text === 'ABC DEF').length)).toEqual([14, 1]);
    expect((await pagesOf('letter')).map(({ texts }) => texts.filter((text) => text === 'ABC DEF').length)).toEqual([10, 5]);
    expect(await pagesOf('single')).toHaveLength(15);
  });
});
