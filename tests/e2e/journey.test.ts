import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { answer } from './support/answerImport.ts';
import { startApplication, type Application } from './support/application.ts';
import { expectAccessible } from './support/accessible.ts';
import { elevationFile, outlineFile, soilZip, vigourFile } from './support/files.ts';

let app: Application;
let blockPath = '';
let estateId = '';

beforeAll(async () => {
  app = await startApplication();
}, 600_000);
afterAll(() => app?.close());

describe('from a vigour image to a pick lot', () => {
  it('the agronomist makes a block from an outline', async () => {
    const { page, context, estateId: estate } = await app.signIn('agronomist');
    estateId = estate;
    await page.getByRole('navigation', { name: 'Places' }).getByRole('link', { name: 'Estate', exact: true }).click();
    await page.getByRole('link', { name: 'Add block' }).click();
    await page.locator('input[type=file]').setInputFiles(outlineFile());
    await expect.poll(() => page.getByText(/\d rows, /).count(), { timeout: 60_000 }).toBeGreaterThan(0);
    await page.getByLabel('Name', { exact: true }).fill('Gate Field');
    await page.getByLabel('Variety').fill('Carignan');
    await page.getByRole('button', { name: 'Make block' }).click();
    await page.waitForURL(/\/blocks\/[0-9a-f-]{36}$/);
    blockPath = new URL(page.url()).pathname;
    await page.getByRole('heading', { name: /Gate Field/ }).waitFor();
    await expectAccessible(page);
    await context.close();
  });

  it('and brings vigour, soil and elevation, answering what only a person knows', async () => {
    const { page, context } = await app.signIn('agronomist');
    await page.goto(`${app.url}/e/${estateId}/imports`);
    await page.locator('input[type=file]').setInputFiles([vigourFile(), soilZip(), elevationFile()]);
    await page.locator('li.import-line', { hasText: 'gate-elevation.tif' }).waitFor({ timeout: 90_000 });
    await answer(page, 'gate-vigour.tif', { 'What is it?': 'Vigour image', 'What shall be made of its bands?': 'NDVI (near infrared, red)', 'Which band is near infrared?': 'Band 2', 'Which band is red?': 'Band 1', 'When was it taken?': '2026-07-14', 'How were the alleys?': 'mown', 'At which growth stage?': 'veraison', 'Which pixels shall count?': 'all of them' });
    await answer(page, 'gate-soil.zip', { 'What is it?': 'Soil', 'Which field holds the value?': 'AWC_MM', 'Are these values or classes?': 'values', 'When was it taken?': '2020-03-01' });
    await answer(page, 'gate-elevation.tif', { 'What is it?': 'Elevation', 'What shall be made of its bands?': 'one band as it is', 'Which band?': 'Band 1', 'In which unit?': 'metres', 'When was it taken?': '2019-01-01' });
    await page.goto(`${app.url}${blockPath}`);
    await expect.poll(() => page.getByText('gate-vigour').count(), { timeout: 60_000 }).toBeGreaterThan(0);
    await context.close();
  });

  it('refuses a file that is no image with the true reason and keeps nothing', async () => {
    const { page, context } = await app.signIn('agronomist');
    await page.goto(`${app.url}/e/${estateId}/imports`);
    await page.locator('input[type=file]').setInputFiles({ name: 'holiday.tif', mimeType: 'image/tiff', buffer: Buffer.from('<html>not an image</html>') });
    const line = page.locator('li.import-line', { hasText: 'holiday.tif' });
    await line.getByText('Refused', { exact: true }).waitFor({ timeout: 60_000 });
    await line.getByText(/It is a web page/).first().waitFor();
    const kept = await page.request.get(`${app.url}/api/estates/${estateId}/imports`);
    const { items } = (await kept.json()) as { items: { fileName: string; fileId: string | null; layers: unknown[] }[] };
    expect(items.filter(({ fileName }) => fileName === 'holiday.tif').map(({ fileId, layers }) => ({ fileId, layers }))).toEqual([{ fileId: null, layers: [] }]);
    await context.close();
  });

  it('runs zoning in the background, leaves, and reads the verdict later', async () => {
    const { page, context } = await app.signIn('agronomist');
    await page.goto(`${app.url}${blockPath}/zoning`);
    await page.getByRole('button', { name: 'Run', exact: true }).click();
    await page.waitForURL(/\/zoning\/[0-9a-f-]{36}$/);
    const address = page.url();
    await page.goto(`${app.url}/e/${estateId}/estate`);
    await page.goto(address);
    await page.getByRole('heading', { name: 'Why this many' }).waitFor({ timeout: 120_000 });
    await expect.poll(() => page.locator('h1').innerText(), { timeout: 60_000 }).toMatch(/zon|one/i);
    await page.getByRole('button', { name: /2 zones/ }).first().click();
    await expectAccessible(page);
    await context.close();
  });

  it('the manager keeps two zones, names one, undoes, redoes and publishes', async () => {
    const { page, context } = await app.signIn('manager');
    await page.goto(`${app.url}${blockPath}/zoning`);
    await page.getByRole('button', { name: /2 zones/ }).first().click();
    await page.getByRole('button', { name: /Keep two as a draft/ }).click();
    await page.waitForURL(/\/zonings\/[0-9a-f-]{36}\/edit$/);
    await page.getByText('Zone 1', { exact: true }).first().click();
    await page.getByLabel('Name', { exact: true }).fill('Gate bank');
    await page.getByRole('button', { name: 'Name it' }).click();
    await page.locator('ol').getByText('Named zone 1 Gate bank').waitFor();
    await page.getByRole('button', { name: 'Undo' }).click();
    await page.locator('ol').getByText('Undone, can be redone').waitFor();
    await page.getByRole('button', { name: 'Redo' }).click();
    await page.locator('ol').getByText('Undone, can be redone').waitFor({ state: 'detached' });
    await expectAccessible(page);
    await page.getByRole('button', { name: /Publish version/ }).click();
    await page.waitForURL(/\/zones$/);
    await context.close();
  });

  it('the manager plans the samples and sends them to the crew', async () => {
    const { page, context } = await app.signIn('manager');
    await page.goto(`${app.url}/e/${estateId}/sampling`);
    await page.locator('select').first().selectOption({ label: 'Gate Field' });
    await page.getByRole('link', { name: 'New plan' }).click();
    await page.getByRole('button', { name: 'Draw the vines' }).click();
    await page.getByRole('button', { name: 'Lock plan' }).click();
    await page.getByRole('dialog').getByRole('button', { name: 'Lock plan' }).click();
    await page.waitForURL(/\/targets$/);
    await page.getByText('Nuno Alvor').first().click();
    await page.getByRole('button', { name: /Send/ }).click();
    await expect.poll(() => page.getByRole('table').filter({ hasText: 'Nuno Alvor' }).count(), { timeout: 60_000 }).toBeGreaterThan(0);
    await context.close();
  });

  it('the crew walks and records on a phone', async () => {
    const { page, context } = await app.signIn('crew', { phone: true });
    await page.goto(`${app.url}/e/${estateId}/field`);
    await page.getByText('Gate Field').first().waitFor({ timeout: 60_000 });
    await page.locator('section', { has: page.getByRole('heading', { name: 'Gate Field' }) }).getByRole('button', { name: 'Start the walk' }).click();
    await page.getByRole('button', { name: 'I have read this' }).click();
    await page.getByRole('button', { name: 'No, leave it off' }).click();
    await page.getByText(/^Row \d+, vine \d+/).first().waitFor();
    await expectAccessible(page);
    const before = await page.getByText(/^Row \d+, vine \d+/).first().innerText();
    for (const key of ['2', '2']) await page.getByRole('button', { name: key, exact: true }).click();
    await page.getByRole('button', { name: 'Save and next' }).click();
    await expect.poll(() => page.locator('body').innerText(), { timeout: 30_000 }).not.toContain(`${before}\n`);
    await expect
      .poll(async () => {
        const answer = await page.request.get(`${app.url}/api/estates/${estateId}/readings?block=${blockPath.split('/').at(-1)}`);
        return ((await answer.json()) as { items: unknown[] }).items.length;
      }, { timeout: 60_000 })
      .toBeGreaterThan(0);
    await context.close();
  });

  it('the winemaker sees ranges and how many more, and ties zones of two blocks into a lot', async () => {
    const { page, context } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/ripeness`);
    await page.getByLabel('Block', { exact: true }).selectOption({ label: 'Long Furrow' });
    await page.getByRole('heading', { name: 'How many more' }).waitFor({ timeout: 60_000 });
    await page.goto(`${app.url}/e/${estateId}/lots`);
    await page.getByText('Marl red').filter({ visible: true }).first().waitFor({ timeout: 60_000 });
    await page.getByRole('button', { name: 'New lot' }).click();
    await page.getByLabel('Name', { exact: true }).fill('Gate and Furrow');
    await page.getByRole('button', { name: 'Make the lot' }).click();
    await page.getByText('Gate and Furrow', { exact: true }).filter({ visible: true }).first().waitFor();
    const board = async () => (await (await page.request.get(`${app.url}/api/estates/${estateId}/lots`)).json()) as { lots: { id: string; name: string; version: number; lines: { blockName: string }[]; summary: { tonnes: { value: number; halfWidth: number } } }[]; zones: { zoneId: string; blockName: string; freeShare: number }[] };
    for (const block of ['Gate Field', 'Long Furrow']) {
      await page.getByRole('table', { name: 'Tonnes by zone' }).getByRole('row').filter({ hasText: block }).filter({ hasText: 'free' }).first().click();
      await page.locator('.button-row', { hasText: 'Put in' }).getByRole('button', { name: 'Gate and Furrow', exact: true }).click();
      await expect.poll(async () => (await board()).lots.find((lot) => lot.name === 'Gate and Furrow')!.lines.map((line) => line.blockName), { timeout: 30_000 }).toContain(block);
    }
    const lot = (await board()).lots.find(({ name }) => name === 'Gate and Furrow')!;
    expect(lot.summary.tonnes.value).toBeGreaterThan(0);
    expect(lot.summary.tonnes.halfWidth).toBeGreaterThan(0);
    await expectAccessible(page);
    await context.close();
  });

  it('the owner invites a person, reads the mail, changes a role and ends access', async () => {
    const { page, context } = await app.signIn('owner');
    await page.goto(`${app.url}/e/${estateId}/people`);
    await page.getByRole('button', { name: 'Invite a person' }).click();
    await page.getByLabel('E-mail').fill('new.hand@example.org');
    await page.getByLabel('agronomist', { exact: true }).uncheck();
    await page.getByLabel('lab', { exact: true }).check();
    await page.getByRole('button', { name: 'Send invitation' }).click();
    await page.getByText('new.hand@example.org').first().waitFor();
    await page.getByRole('link', { name: 'Outbox' }).click();
    await page.getByText(/Your invitation to Marlhaven/).first().click();
    await page.getByText(/\/join\//).first().waitFor();
    await page.goto(`${app.url}/e/${estateId}/people`);
    await page.locator('.ledger-name', { hasText: 'Lucía Serra' }).click();
    await page.getByLabel('lab', { exact: true }).check();
    await page.getByRole('button', { name: 'Keep these roles' }).click();
    await page.getByText('Roles of Lucía Serra are changed.').waitFor();
    await page.locator('.ledger-name', { hasText: 'Lucía Serra' }).click();
    await page.getByRole('button', { name: 'End access' }).first().click();
    await page.getByRole('dialog').getByRole('button', { name: 'End access' }).click();
    await page.getByText('Lucía Serra has no access any more.').waitFor();
    await expectAccessible(page);
    await context.close();
  });
});
