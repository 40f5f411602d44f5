import { randomUUID } from 'node:crypto';
import { readFileSync } from 'node:fs';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { decodeFloatCells } from '../../shared/analysis/cellBytes.ts';
import { cellAt } from '../../shared/analysis/grid.ts';
import type { CellsGrid } from '../../shared/contracts/layers.ts';
import type { PlanSummary, PlanView } from '../../shared/contracts/plans.ts';
import { toUtm } from '../../shared/geo/utm.ts';
import { readPdf, type PdfPage } from '../core/pdfText.ts';
import { startApplication, type Application } from './support/application.ts';
import { readMap } from './support/mapContents.ts';

let app: Application;
let page: Page;
let estateId = '';
const blockName = 'Long Furrow';

beforeAll(async () => {
  app = await startApplication();
  ({ page, estateId } = await app.signIn('manager'));
  await page.setViewportSize({ width: 1440, height: 1400 });
}, 600_000);
afterAll(() => app?.close());

async function newPlan(): Promise<void> {
  await page.goto(`${app.url}/e/${estateId}/sampling`);
  await page.locator('select').first().selectOption({ label: blockName });
  await page.getByRole('link', { name: 'New plan' }).click();
  await page.getByRole('button', { name: 'Draw the vines' }).waitFor();
}
const heading = () => page.locator('h1').innerText();
async function vinesAsked(): Promise<number> {
  return Number(/^([\d  ]+) vines?/u.exec(await heading())![1]!.replace(/\D/gu, ''));
}
/** Only this measure in the plan. */
async function measureOnly(name: string): Promise<void> {
  await page.getByRole('button', { name: 'Other measures' }).click();
  await page.getByRole('checkbox', { name: `${name} in the plan` }).check();
  await page.getByRole('checkbox', { name: 'Clusters per vine in the plan' }).uncheck();
}
async function drawAndLock(): Promise<string> {
  await page.getByRole('button', { name: 'Draw the vines' }).click();
  await page.getByRole('button', { name: 'Lock plan' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Lock plan' }).click();
  await page.waitForURL(/\/targets$/);
  return /plans\/([0-9a-f-]{36})/.exec(page.url())![1]!;
}
async function send(): Promise<void> {
  await page.getByText('Nuno Alvor').first().click();
  await page.getByRole('button', { name: /^Send/ }).click();
  await page.getByText(/has a mail with the round/).waitFor();
}
const api = (path: string) => `${app.url}/api/estates/${estateId}${path}`;
async function asked<Answer>(path: string, sent?: object): Promise<Answer> {
  const { csrfToken } = (await (await page.request.get(`${app.url}/api/session`)).json()) as { csrfToken: string };
  const answer = await (sent ? page.request.post(api(path), { headers: { 'x-csrf-token': csrfToken }, data: sent }) : page.request.get(api(path)));
  expect(answer.ok(), await answer.text()).toBe(true);
  return answer.json() as Promise<Answer>;
}
/** Counts of the first zone as if it were two: many clusters on its upper half, few on the lower: two pieces of ground, as no crew could draw a border round specks. */
async function countTwoPopulations(zoningId: string): Promise<void> {
  const plan = await asked<PlanView>(`/zonings/${zoningId}/plans`, { name: 'Counted', measures: [{ code: 'clusterCount' }], minimum: 40 });
  const { items: layers } = await asked<{ items: { id: string; type: string }[] }>(`/blocks/${plan.blockId}/layers`);
  const cells = await page.request.get(api(`/layers/${layers.find(({ type }) => type === 'elevation')!.id}/cells?block=${plan.blockId}`));
  const values = decodeFloatCells(await cells.body());
  const grid = JSON.parse(cells.headers()['x-grid']!) as CellsGrid;
  const valueAt = (position: readonly [number, number]) => values[cellAt(grid, toUtm(position, grid.epsg))]!;
  const targets = plan.targets.filter(({ zone }) => zone === 1);
  const middle = targets.map(({ position }) => valueAt(position)).sort((a, b) => a - b)[Math.floor(targets.length / 2)]!;
  const readings = targets.map(({ rowId, ordinal, position }, i) => ({ id: randomUUID(), blockId: plan.blockId, rowId, ordinal, measureCode: 'clusterCount', value: (valueAt(position) >= middle ? 40 : 12) + (i % 5), unit: 'clusters', takenAt: new Date().toISOString() }));
  await asked('/readings', { readings });
}
async function download(button: string): Promise<PdfPage[]> {
  const [file] = await Promise.all([page.waitForEvent('download'), page.getByRole('button', { name: button, exact: true }).click()]);
  return readPdf(readFileSync((await file.path())!));
}
const wordsOf = (pages: readonly PdfPage[]) => pages.flatMap(({ texts }) => texts).join(' ');

describe('from a pilot to paper', () => {
  it('nobody knows a spread: a pilot is advised, drawn, locked and sent', async () => {
    await newPlan();
    await measureOnly('Pruning weight');
    await page.getByText('A pilot is advised').waitFor();
    await page.getByRole('button', { name: 'Make this a pilot' }).click();
    expect(await vinesAsked()).toBe(20);
    const planId = await drawAndLock();
    await send();
    const plan = (await (await page.request.get(`${app.url}/api/estates/${estateId}/plans/${planId}`)).json()) as PlanView;
    const { items } = (await (await page.request.get(`${app.url}/api/estates/${estateId}/rounds?plan=${planId}`)).json()) as { items: { id: string }[] };
    const { csrfToken } = (await (await page.request.get(`${app.url}/api/session`)).json()) as { csrfToken: string };
    const readings = plan.targets.map((target, i) => ({ id: randomUUID(), blockId: plan.blockId, roundId: items[0]!.id, targetId: target.id, rowId: target.rowId, ordinal: target.ordinal, measureCode: 'pruningWeight', value: 0.7 + ((i * 7) % 5) / 20, unit: 'kg', takenAt: new Date().toISOString() }));
    const answer = await page.request.post(`${app.url}/api/estates/${estateId}/readings`, { headers: { 'x-csrf-token': csrfToken }, data: { readings } });
    expect(answer.ok(), await answer.text()).toBe(true);
  });

  it('the pilot is read: its spread replaces the guess by the two-stage rule, and the working is shown', async () => {
    await newPlan();
    await measureOnly('Pruning weight');
    await page.getByText(/has been read$/).waitFor();
    await page.getByRole('button', { name: 'Plan with the pilot' }).click();
    await page.getByText(/^Planned with/).waitFor();
    await page.getByText(/^The pilot, n \d+$/).first().waitFor();
    await page.getByRole('button', { name: 'Show: Show me the maths' }).click();
    await page.getByText('n = max(n₁, ⌈n₀ / (1 + n₀ / N)⌉), n₀ = (t · s₁ / E)²').waitFor();
    await page.getByText(/Stein 1945/).waitFor();
  });

  it('a margin too tight asks for too much: what would help is said in figures, and a division goes to the zone editor', async () => {
    await newPlan();
    await page.getByRole('textbox', { name: 'Margin for Clusters per vine' }).first().fill('5');
    await page.keyboard.press('Tab');
    await page.getByText(/needs? more than 60 vines/).waitFor();
    await page.getByText(/Margins \d+\s%\swider/).waitFor();
    const apart = await vinesAsked();
    const pooling = page.getByRole('listitem').filter({ hasText: 'taken as one' });
    const promised = Number(/taken as one: ([\d  ]+) vines/u.exec(await pooling.innerText())![1]!.replace(/\D/gu, ''));
    await pooling.getByRole('button', { name: 'Take this' }).click();
    await page.getByText('sampled as one').first().waitFor();
    expect(await vinesAsked()).toBe(promised);
    expect(promised).toBeLessThan(apart);
    await page.getByText('sampled as one').first().click();
    await page.getByRole('button', { name: 'Sample apart again' }).click();
    expect(await vinesAsked()).toBe(apart);
    // The fruit of the demo is alike inside its zones; once one of them is counted as two, dividing it is recommended.
    await countTwoPopulations(/zonings\/([0-9a-f-]{36})/.exec(page.url())![1]!);
    await newPlan();
    await page.getByText(/plan\. Recommended\./).first().waitFor();
    const divide = page.getByRole('button', { name: 'Divide in a draft' }).first();
    await divide.click();
    await page.getByRole('dialog').getByRole('button', { name: 'Divide in a draft' }).click();
    await page.waitForURL(/\/zonings\/[0-9a-f-]{36}\/edit$/);
    await page.getByText(/asked for too many samples; divided along/).first().waitFor();
    await page.getByRole('button', { name: /Publish version/ }).click();
    await page.waitForURL(/\/zones$/);
  });

  it('a plan on the divided zones is locked, walked on the map by two, and printed as sheet and labels', async () => {
    await newPlan();
    expect(await page.getByRole('table').filter({ hasText: 'Expected result' }).getByRole('row').count()).toBeGreaterThanOrEqual(5);
    await page.getByRole('button', { name: 'Other measures' }).click();
    await page.getByRole('checkbox', { name: '°Brix in the plan' }).check();
    await drawAndLock();
    const walk = page.getByText(/^Walk 1: \d+ vines/);
    const atGate = await walk.innerText();
    await page.getByText('a row end', { exact: true }).click();
    await page.locator('.walk-from select').selectOption({ label: '30' });
    await page.getByText(/^far end \(/).click();
    await page.waitForFunction((before) => !document.body.innerText.includes(before), atGate);
    const atRow = await walk.innerText();
    const map = page.locator('.estate-map[data-ready="true"]');
    await map.waitFor();
    await page.getByText('a place on the map', { exact: true }).click();
    await map.scrollIntoViewIfNeeded();
    await map.click({ position: { x: 60, y: 40 } });
    await page.waitForFunction((before) => !document.body.innerText.includes(before), atRow);
    await page.getByText('Tap the map again to move the start.').waitFor();
    await page.getByRole('textbox', { name: 'People' }).fill('2');
    await page.keyboard.press('Tab');
    await page.getByText(/^Walk 2: \d+ vines/).waitFor();
    await page.getByText('The loads lie within 15 % of each other.').waitFor();
    // A walk each on the map, in a stroke of its own, and a vine of the plan in its row on the strip, as it is said to those who do not see it.
    await map.scrollIntoViewIfNeeded();
    await expect.poll(async () => (await readMap(page, 'lines', 'route-1'))?.drawnIds, { timeout: 30_000 }).toEqual(['walk-1']);
    expect((await readMap(page, 'lines', 'route-0'))!.held.map(({ properties }) => properties.id)).toEqual(['walk-0', 'walk-1']);
    const drawn = await asked<PlanView>(`/plans/${/plans\/([0-9a-f-]{36})/.exec(page.url())![1]}`);
    const strip = page.getByRole('grid', { name: /Long Furrow/ });
    const { items: rows } = await asked<{ items: { id: string }[] }>(`/blocks/${drawn.blockId}/rows`);
    const [target] = [...drawn.targets].sort((a, b) => a.ordinal - b.ordinal);
    await strip.focus();
    for (let row = 0; row < rows.findIndex(({ id }) => id === target!.rowId); row++) await page.keyboard.press('ArrowDown');
    await page.keyboard.press('Home');
    for (let vine = 1; vine < target!.ordinal; vine++) await page.keyboard.press('ArrowRight');
    expect(await strip.getByRole('gridcell').textContent()).toMatch(new RegExp(`^Row ${target!.rowLabel}, vine ${target!.vineNumber}, zone ${target!.zone}\\b.*, target vine`, 'u'));
    await send();
    await page.getByRole('table').filter({ hasText: 'Nuno Alvor' }).getByText('Nuno Alvor').first().click();
    const sheet = await download('Sheet, A4');
    // A4 upright is 595.28 by 841.89 points.
    expect(sheet[0]).toMatchObject({ width: 595.28, height: 841.89 });
    for (const words of ['Long Furrow, Nuno Alvor', 'No restriction recorded', 'Emergency: 112', 'Not this vine', 'BLUE', 'YELLOW', 'Open this round', 'Bag: °Brix']) expect(wordsOf(sheet)).toContain(words);
    const labels = await download('Single labels');
    const brix = (await (await page.request.get(`${app.url}/api/estates/${estateId}/plans/${/plans\/([0-9a-f-]{36})/.exec(page.url())![1]}`)).json()) as PlanView;
    expect(labels).toHaveLength(brix.targets.filter(({ measures }) => measures.includes('brix')).length);
    for (const { texts } of labels) expect(texts[0]).toMatch(/^[A-Z]{3} [A-Z]{3}$/u);
    // As many boxes for clusters as vines are counted, and one more where fruit goes into a bag.
    const boxes = sheet.flatMap((one) => one.boxes.filter(({ height }) => height === 25));
    expect(boxes).toHaveLength(brix.targets.reduce((sum, { measures }) => sum + measures.length, 0));
    await page.getByText('Go on as planned').first().waitFor();
  });

  it('several blocks go out as one day, in an order that the list and the page of the day keep', async () => {
    const { items } = await asked<{ items: PlanSummary[] }>('/plans');
    const locked = items.filter(({ state }) => state === 'locked');
    const [one, other] = [locked[0]!, locked.find(({ blockId }) => blockId !== locked[0]!.blockId)!];
    await page.goto(`${app.url}/e/${estateId}/sampling`);
    for (const plan of [one, other]) await page.getByRole('checkbox', { name: `${plan.blockName} ${plan.name}`, exact: true }).check();
    await page.getByRole('button', { name: 'Find the order' }).click();
    const order = page.getByRole('table', { name: 'A day over several blocks' });
    await order.waitFor();
    const before = await order.innerText();
    await order.getByRole('button', { name: /^Walk .* earlier$/ }).click();
    await page.waitForFunction((text) => document.querySelector('.day table')?.textContent !== text, before);
    const first = (await order.getByRole('row').nth(1).innerText()).includes(one.blockName) ? one : other;
    await page.locator('.send').getByText('Nuno Alvor').click();
    await page.locator('.send').getByRole('button', { name: /^Send/ }).click();
    await page.getByText('2 rounds sent, in this order.').waitFor();
    await page.getByText(/block 1 of the day/).first().click();
    const [sheet] = await download('Page of the day, A4');
    const words = wordsOf([sheet!]);
    expect(words).toContain('Nuno Alvor');
    expect(words).toContain(first.blockName);
    expect(words).toContain('On the way');
  });
});
