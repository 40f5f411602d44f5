import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { EarlierFileView } from '../../shared/contracts/earlier.ts';
import type { ReadingView } from '../../shared/contracts/readings.ts';
import { startApplication, type Application } from './support/application.ts';
import { expectAccessible } from './support/accessible.ts';

let app: Application;
let page: Page;
let estateId = '';
let block = { id: '', name: '' };
let rows: { label: string }[] = [];

beforeAll(async () => {
  app = await startApplication();
  ({ page, estateId } = await app.signIn('agronomist'));
  [block] = (await get<{ items: [typeof block] }>('blocks')).items;
  rows = (await get<{ items: typeof rows }>(`blocks/${block.id}/rows`)).items;
}, 600_000);
afterAll(() => app?.close());

const get = async <T>(path: string) => (await (await page.request.get(`${app.url}/api/estates/${estateId}/${path}`)).json()) as T;
const tables = async () => (await get<{ items: EarlierFileView[] }>('earlier-readings')).items;
const imported = async () => (await get<{ items: ReadingView[] }>(`readings?block=${block.id}&measure=pruningWeight`)).items;

describe('readings of earlier visits', () => {
  it('come in from a table that is reached from the imports, asked about, and stored without what cannot be used', async () => {
    const [first, second] = [rows[0]!.label, rows[1]!.label];
    const table = `Parcelle;Rang;Cep;Date;Bois de taille (kg)\n${block.name};${first};3;03/02/2019;0,62\n${block.name};${second};4;03/02/2019;0,71\n${block.name};9999;1;03/02/2019;0,70\n`;
    await page.goto(`${app.url}/e/${estateId}/imports`);
    await page.getByRole('link', { name: 'Earlier readings' }).click();
    // The desk that is left takes files as well.
    await page.waitForURL(/\/earlier-readings$/);
    await page.getByRole('heading', { name: 'Readings of earlier visits' }).waitFor();
    await page.locator('input[type=file]').setInputFiles({ name: 'hiver 2019.csv', mimeType: 'text/csv', buffer: Buffer.from(table) });
    await page.getByText('Day before month', { exact: true }).click();
    await page.getByRole('button', { name: 'Confirm answers' }).click();
    await page.getByText('there is no row 9999').waitFor();
    await page.getByText('Season 2019 is made for them: 2 readings').waitFor();
    await expectAccessible(page);
    expect(await imported()).toEqual([]);
    await page.getByRole('checkbox', { name: /Leave this 1 out/ }).check();
    await page.getByRole('button', { name: 'Store 2 readings' }).click();
    await page.getByRole('button', { name: 'Take back' }).waitFor();
    expect((await imported()).map(({ rowLabel, value, source, takenAt }) => [rowLabel, value, source, takenAt.slice(0, 10)]).sort()).toEqual([[first, 0.62, 'import', '2019-02-03'], [second, 0.71, 'import', '2019-02-03']].sort());
  });

  it('are taken back as a whole with a reason, and stay in the books', async () => {
    await page.getByRole('button', { name: 'Take back' }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByLabel('Reason').fill('Counted from the other side');
    await dialog.getByRole('button', { name: 'Take back' }).click();
    await page.getByText('Counted from the other side').waitFor();
    expect((await tables()).map(({ state, takenBackReason }) => [state, takenBackReason])).toEqual([['takenBack', 'Counted from the other side']]);
    expect((await imported()).map(({ excludedReason }) => excludedReason)).toEqual(['Counted from the other side', 'Counted from the other side']);
  });
});
