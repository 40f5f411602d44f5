import AxeBuilder from '@axe-core/playwright';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { LabBench } from '../../shared/contracts/lab.ts';
import { labelCode, spellLabelCode } from '../../shared/field/labelCode.ts';
import { writeXlsx } from '../core/lab/writeXlsx.ts';
import { startApplication, type Application } from './support/application.ts';

let app: Application;
let page: Page;
let estateId = '';

beforeAll(async () => {
  app = await startApplication();
  ({ page, estateId } = await app.signIn('lab'));
  await page.goto(`${app.url}/e/${estateId}/lab`);
}, 600_000);
afterAll(() => app?.close());

const bench = async () => (await (await page.request.get(`${app.url}/api/estates/${estateId}/lab`)).json()) as LabBench;
const part = (name: string) => page.getByText(name, { exact: true }).first().click();

async function expectAccessible(): Promise<void> {
  const { violations } = await new AxeBuilder({ page }).analyze();
  expect(violations.filter(({ impact }) => impact === 'serious' || impact === 'critical').map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html.slice(0, 160)).join(' | ')}`)).toEqual([]);
}

describe('a day at the lab', () => {
  it('bags are taken in, one is missing and one is extra', async () => {
    const expected = (await bench()).bags.filter(({ place }) => place === 'expected');
    const extra = labelCode(2_000_001);
    const field = page.getByLabel('Scan or type a label');
    await field.fill(`${extra.slice(0, 5)}${extra.endsWith('B') ? 'C' : 'B'}`);
    await field.press('Enter');
    await page.getByText(/do not fit each other/).waitFor();
    await field.fill([...expected.slice(1).map(({ code }) => spellLabelCode(code).toLowerCase()), extra].join(', '));
    await field.press('Enter');
    await page.getByText(/is extra: nobody has sent/).waitFor();
    await page.getByRole('button', { name: /That was all: 1 bag is not here/ }).click();
    await page.getByRole('button', { name: 'Call 1 bag missing' }).click();
    await expect.poll(async () => (await bench()).bags.find(({ id }) => id === expected[0]!.id)?.place).toBe('missing');
    await page.getByRole('row', { name: new RegExp(spellLabelCode(expected[0]!.code)) }).getByText(/last held by/).waitFor();
    await expectAccessible();
  });

  it('figures are typed by keyboard alone, survive a reload and are stored', async () => {
    await part('Type results');
    const before = (await bench()).results.length;
    const labels = await page.locator('table.grid tbody th .code').allTextContents();
    const empty = await page.locator('table.grid tbody tr').evaluateAll((rows) => rows.findIndex((row) => [...row.querySelectorAll('input')].every((input) => input.value === '')));
    expect(labels.length).toBeGreaterThan(empty);
    await page.locator(`input[data-at="${empty}-0"]`).focus();
    for (const typed of ['23,1', '3.40 / 3.44', '6,2', '1,45']) {
      await page.keyboard.type(typed);
      await page.keyboard.press('ArrowRight');
    }
    await page.keyboard.press('Tab');
    await page.keyboard.type('<0,1');
    await page.keyboard.press('Enter');
    await page.keyboard.press('Shift+Enter');
    await page.reload();
    await expect.poll(() => page.locator(`input[data-at="${empty}-0"]`).inputValue()).toBe('23,1');
    await page.locator(`input[data-at="${empty}-0"]`).focus();
    await page.keyboard.press('Control+Enter');
    await page.getByText('6 results are stored as provisional.').waitFor();
    expect((await bench()).results).toHaveLength(before + 6);
    await expectAccessible();
  });

  it('what nobody has checked stays out of ripeness, which says so and shows it when asked', async () => {
    const { bags, results } = await bench();
    const malic = results.find(({ measureCode }) => measureCode === 'malic')!;
    const { blockId } = bags.find(({ id }) => id === malic.bagId)!;
    await page.goto(`${app.url}/e/${estateId}/blocks/${blockId}/ripeness`);
    await page.getByText(/figures of the lab are not checked yet and stay out here/).waitFor();
    expect(await page.getByText('Malic acid').count()).toBe(0);
    await page.getByRole('button', { name: 'Show with them' }).click();
    await page.getByText('Malic acid').first().waitFor();
    await page.goto(`${app.url}/e/${estateId}/lab`);
  });

  it('an ugly workbook is asked about, and stored only then', async () => {
    const here = (await bench()).bags.filter(({ place, results }) => place === 'here' && results === 0);
    const [one, two] = here as [(typeof here)[0], (typeof here)[0]];
    const bytes = writeXlsx({ Informe: [['Cliente', 'Finca']], Resultados: [['Laboratorio'], [], ['Muestra', 'Azúcares', 'Acidez total', 'pH'], [one.code, 13.2, 4.1, '3,38'], [{ day: '2026-09-03' }, 12.9, 4.3, '3,41'], ['Media', 13.05, 4.2, 3.4]] });
    await part('Read a file');
    await page.locator('input[type=file]').setInputFiles({ name: 'semana 36.xlsx', mimeType: 'application/octet-stream', buffer: Buffer.from(bytes) });
    await page.getByText(/changed the label into the date/).waitFor();
    expect(await page.getByText(/In which unit is “Azúcares”/).count()).toBe(1);
    await page.getByRole('group', { name: /Azúcares/ }).getByText('°Baumé', { exact: true }).click();
    await page.getByRole('group', { name: /Acidez total/ }).getByText('g/L as sulphuric acid', { exact: true }).click();
    await page.getByLabel(/changed the label into the date/).selectOption({ label: spellLabelCode(two.code) });
    await page.getByRole('button', { name: 'Confirm answers' }).click();
    await page.getByText(/in °Bé is read as/).waitFor();
    await expectAccessible();
    expect((await bench()).bags.find(({ id }) => id === one.id)!.results).toBe(0);
    await page.getByLabel('Laboratory', { exact: true }).fill('Coteau');
    await page.getByRole('button', { name: 'Store 6 results' }).click();
    await page.getByText('6 results are stored as provisional.').waitFor();
    const acid = (await bench()).results.find(({ bagId, measureCode }) => bagId === one.id && measureCode === 'ta')!;
    expect(acid).toMatchObject({ typed: '4.1', unitTyped: 'g/L H2SO4', fileName: 'semana 36.xlsx', state: 'provisional' });
    expect(acid.value).toBeCloseTo(6.274, 3);
  });

  it('results are checked in one step', async () => {
    await page.getByRole('button', { name: /^Mark \d+ as checked/ }).click();
    await expect.poll(async () => (await bench()).results.filter(({ state }) => state === 'checked').length).toBeGreaterThan(15);
    await expectAccessible();
  });
});
