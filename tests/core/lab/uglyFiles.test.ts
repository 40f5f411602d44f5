import { describe, expect, it } from 'vitest';
import { readLabBytes } from '../../../server/importers/lab/readLabFile.ts';
import { measures } from '../../../shared/catalog/measures.ts';
import type { LabSurroundings, UnderstoodLabFile } from '../../../shared/lab/file/labFile.ts';
import { understandLabFile } from '../../../shared/lab/file/understand.ts';
import { labels, uglyFiles, type UglyFile } from './uglyFiles.ts';

const around: LabSurroundings = {
  measures: measures.filter(({ where }) => where === 'lab').map(({ code, unit, decimals, min, max }) => ({ code, name: '', unit, decimals, minimum: min, maximum: max })),
  labels: labels.map((code, at) => ({ code, closedOn: at < 4 ? '2026-09-02' : at === 4 ? '2026-02-01' : null, has: at === 5 ? ['ph'] : [] })),
  today: '2026-09-05',
};

const shown = ({ entries }: UnderstoodLabFile) => entries.map(({ code, measure, value, below }) => `${code} ${measure} ${below ? '<' : ''}${Number(value.toFixed(2))}`);
/** Asks for what the file needs in the order in which it asks, as a person would answer. */
async function walk(file: UglyFile) {
  const raw = await readLabBytes(file.bytes);
  const first = understandLabFile(raw, around, {});
  const answers: Record<string, string> = {};
  const asked = new Set<string>();
  let understood = first;
  for (let step = 0; step < 12; step++) {
    const open = understood.questions.filter(({ answer }) => answer === null);
    if (open.length === 0) break;
    for (const { key } of open) {
      asked.add(key);
      if (file.asked?.[key] !== undefined) answers[key] = file.asked[key];
    }
    understood = understandLabFile(raw, around, answers);
  }
  return { first, asked, understood };
}

describe('files of laboratories', () => {
  it('are a corpus of at least twenty', () => expect(uglyFiles.length).toBeGreaterThanOrEqual(20));

  it.each(uglyFiles.map((file) => [file.name, file] as const))('%s', async (_name, file) => {
    const { asked, understood } = await walk(file);
    expect([...asked].sort()).toEqual(Object.keys(file.asked ?? {}).sort());
    expect(understood.questions.filter(({ answer }) => answer === null)).toEqual([]);
    expect(shown(understood).sort()).toEqual([...file.read].sort());
    for (const code of file.said ?? []) expect(understood.words.map((word) => word.code)).toContain(code);
  });

  it('give no result of an ambiguous cell before it is answered', async () => {
    const doubtful = uglyFiles.filter(({ asked }) => asked && Object.keys(asked).some((key) => /^(shift|joined|scale|decimal|unit|sheet|repeats|again)/.test(key)));
    expect(doubtful.length).toBeGreaterThan(10);
    for (const file of doubtful) {
      const { first, understood } = await walk(file);
      const settled = new Set(shown(understood));
      expect(shown(first).filter((result) => !settled.has(result)), file.name).toEqual([]);
    }
  });

  it('give each line its day of analysis, in words of any of the languages, and none that is in doubt', async () => {
    const daysOf = async (cells: readonly string[], answers: Record<string, string> = {}) => {
      const raw = await readLabBytes(new Uint8Array(Buffer.from(`Sample;Date;Brix\n${cells.map((cell, at) => `${labels[at]};${cell};22,1`).join('\n')}\n`, 'utf8')));
      return understandLabFile(raw, around, answers).entries.map(({ analysedOn }) => analysedOn);
    };
    expect(await daysOf(['3 sept. 2026', '3 settembre 2026', '3. Sep 2026', '3 de septiembre de 2026'])).toEqual(Array.from({ length: 4 }, () => '2026-09-03'));
    expect(await daysOf(['1er septembre 2026', '3 set 2026', 'September 3rd, 2026', 'jeu. 3 sept 26'])).toEqual(['2026-09-01', '2026-09-03', '2026-09-03', '2026-09-03']);
    expect(await daysOf(['20260903', 'Thu, Sep 3, 2026', '2026-09-03T14:30:00Z', '20261303'])).toEqual(['2026-09-03', '2026-09-03', '2026-09-03', null]);
    const doubtful = ['2026-10-04', '2026-08-20', '2026-09-04'];
    expect(await daysOf(doubtful)).toEqual([null, null, '2026-09-04']);
    expect(await daysOf(doubtful, { dateDoubt: 'keep' })).toEqual(doubtful);
  });

  it('that are no tables are refused with the way out', async () => {
    const text = (content: string) => readLabBytes(new Uint8Array(Buffer.from(content, 'latin1')));
    await expect(text('%PDF-1.7 …')).rejects.toThrow(/PDF.*type the results in/);
    await expect(text('\xd0\xcf\x11\xe0 old')).rejects.toThrow(/\.xls.*Save it as \.xlsx/);
    await expect(text('<html><table></table></html>')).rejects.toThrow(/web page/);
    await expect(text('PK\x03\x04 broken')).rejects.toThrow(/list of contents/);
    await expect(text('Code;Brix\n"ABC;23')).rejects.toThrow(/quotation mark/);
    await expect(text(`Code;Brix\n${'X;1\n'.repeat(6000)}`)).rejects.toThrow(/rows; 5000 is the most/);
  });
});
