import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { expectAccessible } from './support/accessible.ts';
import { answer } from './support/answerImport.ts';
import { startApplication, type Application } from './support/application.ts';
import { outlineFile, place } from './support/files.ts';
import { folder, indexAnswers } from './support/folderOfFiles.ts';

/** A folder with one good picture among ten damaged or doubtful files, brought in by somebody who must know what became of each. */

let app: Application;
let estateId = '';
let blockId = '';

interface Layer {
  id: string;
  name: string;
  type: string;
  readiness: string;
  statistics: { mean: number };
  findings: { code: string }[];
}

beforeAll(async () => {
  app = await startApplication();
}, 600_000);
afterAll(() => app?.close());

const lineOf = (page: Page, name: string) => page.locator('li.import-line', { hasText: name }).first();
const layers = async (page: Page) => ((await (await page.request.get(`${app.url}/api/estates/${estateId}/blocks/${blockId}/layers`)).json()) as { items: Layer[] }).items;
async function layer(page: Page, name: string): Promise<Layer> {
  await expect.poll(async () => (await layers(page)).some((each) => each.name === name), { timeout: 60_000 }).toBe(true);
  return (await layers(page)).find((each) => each.name === name)!;
}
const codes = ({ findings }: Layer) => findings.map(({ code }) => code);

async function openDesk(): Promise<{ page: Page; close: () => Promise<void> }> {
  const { page, context, estateId: estate } = await app.signIn('agronomist');
  estateId = estate;
  await page.goto(`${app.url}/e/${estateId}/imports`);
  await page.getByRole('heading', { name: 'Imports' }).waitFor();
  return { page, close: () => context.close() };
}

describe('a folder of files', () => {
  it('begins with the outline, which becomes a block', async () => {
    const { page, close } = await openDesk();
    await page.locator('input[type=file]').setInputFiles(outlineFile());
    await answer(page, 'gate-field.geojson', { 'What is it?': 'Outlines of blocks', 'Which field names the blocks?': 'name' }, 'Make 1 block');
    const line = lineOf(page, 'gate-field.geojson');
    for (const spacing of ['Row spacing', 'Vine spacing']) {
      const field = line.getByLabel(spacing);
      if (await field.count()) await field.first().fill(spacing.startsWith('Row') ? '2.5' : '1.2');
    }
    await line.getByRole('button', { name: 'Make 1 block' }).click();
    await page.getByText('1 block is made.').waitFor();
    const { items } = (await (await page.request.get(`${app.url}/api/estates/${estateId}/blocks`)).json()) as { items: { id: string; name: string }[] };
    blockId = items.find(({ name }) => name === 'Gate Field')!.id;
    await close();
  });

  it('is sent at once: what cannot be used is refused with the true reason, what is open asks', async () => {
    const { page, close } = await openDesk();
    const asking = [folder.good, folder.withoutReference, folder.untaggedVoids, folder.bytes, folder.swapped, folder.crossing];
    await page.locator('input[type=file]').setInputFiles([...folder.refused.map(({ file }) => file), ...asking]);
    for (const { file, because } of folder.refused) {
      const line = lineOf(page, file.name);
      await line.getByText('Refused', { exact: true }).waitFor({ timeout: 90_000 });
      expect(await line.innerText()).toMatch(because);
    }
    for (const { name } of asking) await lineOf(page, name).getByText('Asks', { exact: true }).waitFor({ timeout: 90_000 });
    const { items } = (await (await page.request.get(`${app.url}/api/estates/${estateId}/imports`)).json()) as { items: { fileName: string; state: string; layers: unknown[] }[] };
    const ofFolder = items.filter(({ fileName }) => folder.refused.some(({ file }) => file.name === fileName));
    expect(ofFolder.map(({ state, layers: made }) => [state, made.length])).toEqual(folder.refused.map(() => ['refused', 0]));
    expect(await layers(page)).toEqual([]);
    await expectAccessible(page);
    await close();
  });

  it('the good picture is placed once its questions are answered', async () => {
    const { page, close } = await openDesk();
    await answer(page, folder.good.name, indexAnswers);
    const placed = await layer(page, 'vigour-2026');
    expect([placed.readiness, ...codes(placed)]).toEqual(['ready', 'cloudUnseen']);
    await close();
  });

  it('the picture without a reference system is placed by choosing its ghost on the map, on the same ground', async () => {
    const { page, close } = await openDesk();
    const line = lineOf(page, folder.withoutReference.name);
    await line.locator('h2 button').click();
    await line.getByText(`UTM zone ${place.epsg % 100}${place.epsg < 32_700 ? 'N' : 'S'} (EPSG:${place.epsg})`, { exact: false }).click();
    await line.getByRole('button', { name: /Confirm placing [A-Z]/ }).click();
    await line.getByLabel('What is it?').first().waitFor();
    await answer(page, folder.withoutReference.name, indexAnswers);
    const [here, good] = [await layer(page, 'no-reference'), await layer(page, 'vigour-2026')];
    expect(here.statistics.mean).toBe(good.statistics.mean);
    await close();
  });

  it('voids that nobody marked are asked about, shown where they are, and stop the layer until somebody answers for it', async () => {
    const { page, close } = await openDesk();
    await answer(page, folder.untaggedVoids.name, { 'Is this value a measurement?': 'no: −9 999 means missing', ...indexAnswers });
    const voids = await layer(page, 'voids');
    expect([voids.readiness, codes(voids)[0]]).toEqual(['blocked', 'partial']);
    await page.goto(`${app.url}/e/${estateId}/blocks/${blockId}/layers/${voids.id}`);
    await page.getByRole('button', { name: 'Show where' }).first().focus();
    await page.keyboard.press('Enter');
    await page.getByText(/Hatched on the map: .* of the block, mostly in the east\./).waitFor();
    await expectAccessible(page);
    await page.getByRole('button', { name: 'Use it all the same' }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByLabel('Reason').fill('The east is replanted and left out.');
    await dialog.getByRole('button', { name: 'Use it all the same' }).click();
    await page.getByText(/answers for its use since .*The east is replanted/).waitFor();
    await close();
  });

  it('bytes where an index was told of are loaded and called impossible', async () => {
    const { page, close } = await openDesk();
    await answer(page, folder.bytes.name, indexAnswers);
    const bytes = await layer(page, 'bytes-ndvi');
    expect([bytes.readiness, codes(bytes)[0]]).toEqual(['blocked', 'impossible']);
    await close();
  });

  it('a table with its axes the wrong way round is put right after it was confirmed', async () => {
    const { page, close } = await openDesk();
    await answer(page, folder.swapped.name, { 'Swap latitude and longitude?': 'A: yes, swap them', 'What is it?': 'Soil conductivity', 'Which field holds the value?': /^EC \(mS\/m\)/, 'In which unit?': 'mS/m', 'When was it taken?': '2026-03-02', 'Was it driven between steel-trellised rows?': 'yes' });
    const survey = await layer(page, 'survey');
    expect(survey.type).toBe('conductivity');
    expect(survey.statistics.mean).toBeGreaterThan(20);
    expect(survey.statistics.mean).toBeLessThan(35);
    expect(codes(survey)).toContain('steelTrellis');
    await close();
  });

  it('soil with an outline that crosses itself is used as repaired, and its legend takes colours', async () => {
    const { page, close } = await openDesk();
    const line = lineOf(page, folder.crossing.name);
    await line.getByText(/crosses itself/).first().waitFor();
    await answer(page, folder.crossing.name, { 'What is it?': 'Soil', 'Which field holds the value?': /^SOIL/, 'Are these values or classes?': 'classes' });
    const soil = await layer(page, 'soil-areas');
    expect([soil.type, soil.readiness, ...codes(soil)]).toEqual(['soilClass', 'ready']);
    await page.goto(`${app.url}/e/${estateId}/blocks/${blockId}/layers/${soil.id}`);
    await page.getByRole('button', { name: 'Edit' }).click();
    await page.getByLabel('Colour of class Sand').fill('#c08030');
    await page.getByRole('button', { name: 'Keep', exact: true }).click();
    await page.getByText('The layer is kept.').waitFor();
    await expect.poll(() => page.locator('.layer-legend li', { hasText: 'Sand' }).locator('i').evaluate((mark) => getComputedStyle(mark).backgroundColor)).toBe('rgb(192, 128, 48)');
    await close();
  });

  it('leaves nothing that asks, and every layer where it can be checked', async () => {
    const { page, close } = await openDesk();
    await page.getByText('Nothing waits for an answer.').waitFor();
    expect((await layers(page)).map(({ name, readiness }) => [name, readiness]).sort()).toEqual([['bytes-ndvi', 'blocked'], ['no-reference', 'ready'], ['soil-areas', 'ready'], ['survey', 'doubt'], ['vigour-2026', 'ready'], ['voids', 'overridden']]);
    await close();
  });
});
