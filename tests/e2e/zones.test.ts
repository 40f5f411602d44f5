import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import AxeBuilder from '@axe-core/playwright';
import type { FeatureCollection, MultiPolygon } from 'geojson';
import type { Locator, Page } from 'playwright-core';
import * as shapefiles from 'shpjs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ZoningView } from '../../shared/contracts/zonings.ts';
import { startApplication, type Application } from './support/application.ts';
import { readMap } from './support/mapContents.ts';

/** The reader's declared types name only the part that the importers use. */
const shp = (shapefiles as unknown as { default: (zip: ArrayBuffer) => Promise<FeatureCollection<MultiPolygon>> }).default;

let app: Application;
let folder: string;
let estatePath: string;
let blockId: string;
let zoningId: string;

beforeAll(async () => {
  app = await startApplication();
  folder = mkdtempSync(join(tmpdir(), 'patchrow-zones-'));
}, 600_000);
afterAll(async () => {
  rmSync(folder, { recursive: true, force: true });
  await app?.close();
});

const read = async <Shape>(page: Page, path: string) => (await (await page.request.get(`${app.url}/api${estatePath.replace('/e/', '/estates/')}${path}`)).json()) as Shape;
const zoning = (page: Page) => read<ZoningView>(page, `/zonings/${zoningId}`);
/** A map that is still drawing is asked again: with software drawing that takes seconds on a busy machine. */
const pictures = async (page: Page) => (await readMap(page, 'zones', 'zone-fill'))?.pictures ?? [];
const done = (page: Page, words: string | RegExp) => page.locator('ol li').filter({ hasText: words }).first().waitFor();

/** Corners given as text, as somebody without a pointer gives them. */
async function giveCorners(page: Page, corners: readonly (readonly [number, number])[]): Promise<void> {
  await page.getByRole('button', { name: 'Paste coordinates' }).click();
  await page.getByLabel('Corners, one a line').fill(corners.map((corner) => corner.join(', ')).join('\n'));
  await page.getByRole('button', { name: 'Take these' }).click();
}

/** West, south, east, north of a zone. */
function boxOf(view: ZoningView, number: number): readonly [number, number, number, number] {
  const points = view.zones.find((zone) => zone.number === number)!.geometry.coordinates.flat(2);
  const [lons, lats] = [points.map(([lon]) => lon!), points.map(([, lat]) => lat!)];
  return [Math.min(...lons), Math.min(...lats), Math.max(...lons), Math.max(...lats)];
}

async function expectAccessible(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page }).analyze();
  expect(violations.filter(({ impact }) => impact === 'serious' || impact === 'critical').map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html.slice(0, 160)).join(' | ')}`)).toEqual([]);
}

describe('from layers to zones in force', () => {
  it('the agronomist runs a named zoning, reads why, sets it beside the earlier one and keeps two zones', async () => {
    const { page, context, estateId } = await app.signIn('agronomist');
    estatePath = `/e/${estateId}`;
    const blocks = await read<{ items: { id: string; name: string }[] }>(page, '/blocks');
    blockId = blocks.items.find(({ name }) => name === "Tinker's Acre")!.id;
    await page.goto(`${app.url}${estatePath}/blocks/${blockId}/zoning`);
    await page.getByRole('button', { name: 'Run again' }).click();
    await page.getByLabel('Name of the run').fill('Spring look');
    await page.getByLabel('Narrowest part').fill('2');
    await page.getByRole('button', { name: 'Run', exact: true }).click();
    await page.waitForURL(/\/zoning\/[0-9a-f-]{36}$/);
    zoningId = page.url().split('/').at(-1)!;
    await page.getByRole('heading', { name: 'Why this many' }).waitFor({ timeout: 60_000 });
    expect(await page.locator('h1').innerText()).toMatch(/^(Worth|Treat)/);
    await page.getByRole('heading', { name: 'Other seasons' }).waitFor();
    await page.getByLabel('Compare with').selectOption({ index: 1 });
    await page.getByText(/vines? changes? zone/).first().waitFor();
    await page.getByRole('button', { name: /2 zones/ }).first().click();
    await page.getByText(/fits? another zone nearly as well or better/).first().waitFor();
    await page.getByRole('button', { name: 'Show certainty on the map' }).click();
    const reading = page.locator('.estate-map').getByRole('status');
    await reading.getByText(/arrow keys/).waitFor();
    await page.getByText('Certainty of zones').waitFor();
    // The middle of the map, by keys alone.
    await page.locator('.estate-map canvas').focus();
    await page.keyboard.press('Enter');
    await reading.getByText(/^Zone [12]: [01]\.\d\d\. Next zone [12]: [01]\.\d\d\.$/).waitFor();
    const [own, next] = [...(await reading.innerText()).matchAll(/: ([01]\.\d\d)/g)].map(([, share]) => Number(share));
    expect(own! + next!).toBeCloseTo(1, 1);
    await expect.poll(() => pictures(page), { timeout: 20_000 }).toContain('cells-certainty');
    await expectAccessible(page);
    await page.getByRole('button', { name: 'Hide certainty on the map' }).click();
    await expect.poll(() => pictures(page), { timeout: 20_000 }).toEqual(['relief']);
    await page.getByRole('button', { name: /Keep two as a draft/ }).click();
    await page.waitForURL(/\/edit$/);
    await context.close();
  });

  it('the manager splits, joins, renumbers, recolours and gives ground, each with a reason if there is one', async () => {
    const { page, context } = await app.signIn('manager');
    await page.goto(`${app.url}${estatePath}/zonings/${zoningId}/edit`);
    const ledger = page.getByRole('table', { name: 'Zones of the block' });
    await ledger.getByText('Zone 1', { exact: true }).click();
    const [west, south, east, north] = boxOf(await zoning(page), 1);
    await page.getByLabel('Reason for the next edit').fill('Old drain');
    await page.getByRole('button', { name: 'Split by a line' }).click();
    await giveCorners(page, [[west, (south + north) / 2], [east, (south + north) / 2]]);
    await page.getByRole('button', { name: 'Split zone 1 here' }).click();
    await done(page, 'Zone 1 split by a line');
    await done(page, 'Old drain');
    expect((await zoning(page)).zones).toHaveLength(3);

    await ledger.getByText('Zone 3', { exact: true }).click();
    await page.getByRole('button', { name: 'Take ground by a drawn area' }).click();
    const [left, bottom, right, top] = boxOf(await zoning(page), 2);
    const [x, y] = [(left + right) / 2, (bottom + top) / 2];
    await giveCorners(page, [[x, y], [right, y], [right, top], [x, top]]);
    await page.getByRole('button', { name: 'Give it to zone 3' }).click();
    await done(page, 'A drawn area given to zone 3');

    await page.getByLabel('Number', { exact: true }).fill('2');
    await page.getByRole('button', { name: 'Renumber' }).click();
    await done(page, 'Zones renumbered');
    await page.getByRole('button', { name: 'Colour 2' }).first().click();
    await done(page, /recoloured/);
    expect((await zoning(page)).zones.some(({ colour }) => colour !== null)).toBe(true);
    await expectAccessible(page);
    await context.close();
  });

  it('gives a row by keyboard alone, follows the rows, and takes it all back and again', async () => {
    const { page, context } = await app.signIn('manager');
    // Long blocks are drawn anew after each act, and the focus comes after that.
    const holds = (part: Locator) => expect.poll(() => part.evaluate((element) => element === document.activeElement), { timeout: 20_000 }).toBe(true);
    await page.goto(`${app.url}${estatePath}/zonings/${zoningId}/edit`);
    const strip = page.getByLabel("Rows of Tinker's Acre with their zones").first();
    await strip.focus();
    for (let step = 0; step < 5; step++) await page.keyboard.press('ArrowDown');
    await page.keyboard.press('Space');
    await page.keyboard.press((await zoning(page)).zones.length > 2 ? '3' : '2');
    await done(page, 'One row given to zone');
    await page.locator('ol li').getByText('Row 6', { exact: true }).first().waitFor();
    // What is pressed goes with its act: whoever works by keys goes on at the rows or at the zone's line.
    for (let step = 0; step < 20; step++) await page.keyboard.press('ArrowDown');
    await page.keyboard.press('Space');
    await page.getByRole('button', { name: /along this row$/ }).press('Enter');
    await done(page, 'split along a row');
    await holds(strip);
    const line = page.getByRole('table', { name: 'Zones of the block' }).locator('tbody .ledger-name').first();
    await line.press('Enter');
    // Rows that are still chosen elsewhere do not draw the focus away from the line.
    await strip.press('Space');
    await page.getByLabel('Name', { exact: true }).fill('By keys');
    await page.getByLabel('Name', { exact: true }).press('Enter');
    await done(page, 'By keys');
    await holds(line);
    // A line beside the block cuts nothing, and that is said where one looks, however far down.
    // The pen takes whoever works by keys to its map, and back to the line when it is put down.
    await page.getByRole('button', { name: 'Split by a line' }).press('Enter');
    await holds(page.locator('.map canvas'));
    await page.getByRole('button', { name: 'Not now' }).press('Enter');
    await holds(line);
    await page.getByRole('button', { name: 'Split by a line' }).press('Enter');
    const [west, south, , north] = boxOf(await zoning(page), 1);
    await giveCorners(page, [[west - 1, south], [west - 1, north]]);
    await page.getByRole('button', { name: /^Split zone \d+ here$/ }).click();
    const said = page.getByText('does not cut zone', { exact: false });
    await said.waitFor();
    expect(await said.evaluate((words) => words.getBoundingClientRect().top >= 0 && words.getBoundingClientRect().bottom <= innerHeight)).toBe(true);
    await page.getByRole('button', { name: 'Not now' }).first().click();
    await page.getByRole('button', { name: 'Follow the rows' }).click();
    await done(page, 'Snapped to whole rows');
    expect(await said.count()).toBe(0);
    const before = await zoning(page);
    await page.getByRole('button', { name: 'Undo' }).click();
    await page.locator('ol').getByText('Undone, can be redone').waitFor();
    await page.getByRole('button', { name: 'Redo' }).click();
    await page.locator('ol').getByText('Undone, can be redone').waitFor({ state: 'detached' });
    expect((await zoning(page)).zones).toEqual(before.zones);
    await context.close();
  });

  it('keeps what is drawn, and why, while its person has to sign in again', async () => {
    const { page, context } = await app.signIn('manager');
    const editor = `${app.url}${estatePath}/zonings/${zoningId}/edit`;
    await page.goto(editor);
    await page.getByRole('table', { name: 'Zones of the block' }).locator('tbody tr').first().click();
    await page.getByRole('button', { name: 'Split by a line' }).click();
    const [west, south, east] = boxOf(await zoning(page), 1);
    await giveCorners(page, [[west, south], [east, south]]);
    await page.getByLabel('Reason for the next edit').fill('Two soils');
    const corner = await page.getByLabel('Longitude of corner 2').inputValue();
    expect(Number(corner)).toBeCloseTo(east, 6);
    await context.clearCookies();
    await page.getByRole('button', { name: /^Split zone 1 here$/ }).click();
    await page.getByText('What you sent last was not taken', { exact: false }).waitFor();
    await page.getByLabel('E-mail').fill('manager@demo.example');
    await page.locator('input[type=password]').fill('patchrow-demo');
    await page.locator('form button[type=submit]').click();
    await page.waitForURL(editor);
    await page.getByRole('heading', { name: 'Split zone 1' }).waitFor();
    expect(await page.getByLabel('Longitude of corner 2').inputValue()).toBe(corner);
    expect(await page.getByLabel('Reason for the next edit').inputValue()).toBe('Two soils');
    await context.close();
  });

  it('tells the second of two editors, overwrites nothing, and publishes with its effects shown', async () => {
    const [one, two] = await Promise.all([app.signIn('manager'), app.signIn('agronomist')]);
    for (const { page } of [one, two]) {
      await page.goto(`${app.url}${estatePath}/zonings/${zoningId}/edit`);
      await page.getByRole('heading', { name: 'Publishing will' }).waitFor();
    }
    await two.page.getByText(/has these zones open too/).waitFor();
    for (const [at, { page }] of [two, one].entries()) {
      await page.getByRole('table', { name: 'Zones of the block' }).locator('tbody tr').first().click();
      await page.getByLabel('Name', { exact: true }).fill(at === 0 ? 'Theirs' : 'Mine');
      await page.getByRole('button', { name: 'Name it' }).click();
      if (at === 0) await done(page, 'Theirs');
    }
    await one.page.getByText(/changed these zones since you read them/).first().waitFor();
    await one.page.getByRole('button', { name: 'Load again' }).first().click();
    await done(one.page, 'Theirs');
    await one.page.getByText(/vines? changes? zone/).first().waitFor();
    await one.page.getByRole('button', { name: /Publish version/ }).click();
    await one.page.getByText(/are in force/).waitFor();
    expect((await zoning(one.page)).state).toBe('live');
    await two.context.close();
    await one.context.close();
  });

  it('leaves as a shapefile that another reader opens, with the same zones, areas and names', async () => {
    const { page, context } = await app.signIn('manager');
    await page.goto(`${app.url}${estatePath}/zonings/${zoningId}/edit`);
    await page.getByLabel('As a file').selectOption({ label: 'Shapefile (ZIP)' });
    const coming = page.waitForEvent('download');
    await page.getByRole('button', { name: 'Take the file' }).click();
    const file = join(folder, 'zones.zip');
    await (await coming).saveAs(file);
    const { zones } = await zoning(page);
    const bytes = readFileSync(file);
    const { features } = await shp(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length) as ArrayBuffer);
    expect(features.map(({ properties }) => [properties!.ZONE, properties!.NAME])).toEqual(zones.map(({ number, name }) => [number, name]));
    features.forEach(({ properties }, at) => expect(Math.abs((properties!.AREA_HA as number) * 10_000 - zones[at]!.areaM2)).toBeLessThan(1));
    const gdal = gdalSays(`/vsizip/${file}/zones.shp`);
    if (gdal !== null) expect(gdal).toMatch(new RegExp(`Feature Count: ${zones.length}\\b`));
    await context.close();
  });
});

/** What GDAL's reader says of a file; null on a machine without it. */
function gdalSays(file: string): string | null {
  try {
    execFileSync('ogrinfo', ['--version'], { stdio: 'ignore' });
  } catch {
    return null;
  }
  return execFileSync('ogrinfo', ['-so', '-al', file], { encoding: 'utf8' });
}
