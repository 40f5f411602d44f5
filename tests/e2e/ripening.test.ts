import AxeBuilder from '@axe-core/playwright';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { LabBench } from '../../shared/contracts/lab.ts';
import type { LotsBoard } from '../../shared/contracts/lots.ts';
import type { RipeningView } from '../../shared/contracts/results.ts';
import { spellLabelCode } from '../../shared/field/labelCode.ts';
import { startApplication, type Application } from './support/application.ts';
import { codeOn, readPrinted, type Printed } from './support/printed.ts';

let app: Application;

beforeAll(async () => {
  app = await startApplication();
}, 600_000);
afterAll(() => app?.close());

/** No violation that axe calls serious or worse. */
async function expectAccessible(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page }).analyze();
  expect(violations.filter(({ impact }) => impact === 'serious' || impact === 'critical').map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html.slice(0, 160)).join(' | ')}`)).toEqual([]);
}

const board = async (page: Page, estateId: string) => (await (await page.request.get(`${app.url}/api/estates/${estateId}/lots`)).json()) as LotsBoard;
const ripening = async (page: Page, estateId: string, blockId: string) => (await (await page.request.get(`${app.url}/api/estates/${estateId}/blocks/${blockId}/ripening`)).json()) as RipeningView;
const newest = ({ values }: RipeningView, zone: number) => values.filter((value) => value.measure === 'brix' && value.zone === zone).sort((a, b) => b.visit.localeCompare(a.visit))[0]!;

/** A PDF behind a link of the screen, as whoever prints it gets it. */
async function printed(page: Page, href: string): Promise<Printed> {
  const answer = await page.request.get(new URL(href, app.url).href);
  expect(answer.headers()['content-type']).toBe('application/pdf');
  const folder = mkdtempSync(join(tmpdir(), 'patchrow-print-'));
  const file = join(folder, 'print.pdf');
  writeFileSync(file, await answer.body());
  try {
    return readPrinted(file);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

let blockId = '';
let lotName = '';
let noticeNumber = '';
let noticeCode: string | null = null;

describe('from results to the season’s review', () => {
  it('the lab types the results of a bag and checks them, and only then does ripeness count them', async () => {
    const { page, context, estateId } = await app.signIn('lab');
    const bench = async () => (await (await page.request.get(`${app.url}/api/estates/${estateId}/lab`)).json()) as LabBench;
    const bag = (await bench()).bags.find(({ place, results }) => place === 'here' && results === 0)!;
    blockId = bag.blockId!;
    const before = await ripening(page, estateId, blockId);
    await page.goto(`${app.url}/e/${estateId}/lab`);
    await page.getByText('Type results', { exact: true }).first().click();
    await page.getByRole('row', { name: new RegExp(spellLabelCode(bag.code)) }).locator('input').first().focus();
    await page.keyboard.type('23,9');
    await page.keyboard.press('Control+Enter');
    await page.getByText('1 result is stored as provisional.').waitFor();
    const typed = (await bench()).results.find(({ bagId, measureCode }) => bagId === bag.id && measureCode === 'brix')!;
    expect(typed).toMatchObject({ value: 23.9, state: 'provisional' });
    expect((await ripening(page, estateId, blockId)).values).toEqual(before.values);
    await page.getByText('Check results', { exact: true }).first().click();
    await page.getByRole('button', { name: /^Mark \d+ as checked/ }).click();
    await expect.poll(async () => (await bench()).results.find(({ id }) => id === typed.id)?.state).toBe('checked');
    const after = await ripening(page, estateId, blockId);
    const counted = (view: RipeningView) => view.zones.reduce((sum, { number }) => sum + newest(view, number).n, 0);
    expect(counted(after)).toBeGreaterThan(counted(before));
    await context.close();
  });

  it('the winemaker reads results, how many more, a forecast with its dates, and what the weather did', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/blocks/${blockId}/ripeness`);
    await page.getByRole('heading', { name: 'How many more' }).waitFor({ timeout: 60_000 });
    const view = await ripening(page, estateId, blockId);
    const more = page.getByRole('table', { name: 'How many more' });
    for (const zone of view.zones) {
      const value = newest(view, zone.number);
      const line = await more.getByRole('row').nth(zone.number).innerText();
      expect(line).toContain(value.mean.toFixed(1));
      expect(line).toMatch(new RegExp(`n ${value.n}\\b`));
      expect(line.trim().split(/\s+/).at(-1)).toBe(value.more === 0 ? 'none' : String(value.more));
    }
    const total = view.zones.reduce((sum, { number }) => sum + newest(view, number).more!, 0);
    await more.getByText(new RegExp(`^${total} readings?, `)).waitFor();
    await page.getByLabel('Way on this screen').selectOption({ label: 'sugar by the OIV table, ÷ 16.83' });
    await page.getByText(/Potential alcohol: sugar of must by the OIV table.*not the alcohol of a label/).waitFor();
    await page.getByText('mm of rain in three days').first().waitFor();
    await page.getByText(/degree days above 10 °C/).waitFor();
    await page.getByLabel('Your target').fill('26');
    await page.getByLabel('Your target').press('Tab');
    await expect.poll(() => page.getByText(/about .* between|was reached about|not before|No date for/).count()).toBeGreaterThan(0);
    await page.getByText(/When ripening flattens, a straight line runs ahead/).waitFor();
    await expectAccessible(page);
    await page.goto(`${app.url}/e/${estateId}/weather`);
    await page.getByLabel('Or paste the table here').fill('date,max,min\n03/09/2026,28,14\n');
    await page.getByRole('button', { name: 'Read it back' }).click();
    await page.getByText('How are the dates written?').waitFor();
    await expectAccessible(page);
    await context.close();
  });

  it('has lots proposed, changes the proposal by hand and puts it in force', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/lots`);
    await page.getByRole('button', { name: 'Suggest lots' }).click();
    await page.getByRole('group', { name: /Chance that a lot fits/ }).getByText('50').click();
    await page.getByRole('button', { name: 'Propose', exact: true }).click();
    await page.getByText(/^Proposal of/).waitFor({ timeout: 60_000 });
    await page.getByText(/spreads from its lot’s mean|alone in its lot/).first().waitFor();
    await expectAccessible(page);
    const live = await board(page, estateId);
    expect(live.lots.some(({ name }) => name.endsWith(' 1'))).toBe(false);
    const whatIf = live.scenarios.find(({ isLive }) => !isLive)!;
    const proposal = (await (await page.request.get(`${app.url}/api/estates/${estateId}/lots?scenario=${whatIf.id}`)).json()) as LotsBoard;
    lotName = proposal.suggestion!.lots[0]!.lotName;
    const free = proposal.zones.find(({ freeShare }) => freeShare > 0.99)!;
    await page.getByRole('row', { name: new RegExp(`${free.blockName}.*${free.name}`) }).first().click();
    await page.getByRole('button', { name: lotName, exact: true }).last().click();
    await page.getByText(`${free.blockName} zone ${free.number} is in ${lotName}.`).waitFor();
    await page.getByRole('button', { name: `Take out of ${lotName}` }).click();
    await page.getByText(`${free.blockName} zone ${free.number} is out of ${lotName}.`).waitFor();
    await page.getByRole('button', { name: 'Side by side' }).click();
    await page.getByRole('button', { name: 'Show them' }).click();
    await page.getByText('Chance that every lot fits its tank').waitFor();
    await page.getByRole('button', { name: 'Put in force' }).click();
    await page.getByRole('dialog').getByRole('button', { name: 'Put in force' }).click();
    await page.getByText(/is in force now/).waitFor();
    expect((await board(page, estateId)).lots.map(({ name }) => name)).toContain(lotName);
    await context.close();
  });

  it('moves a zone between lots by dragging, and looks at the lots as they stood', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/lots`);
    const before = await board(page, estateId);
    const [from, to] = before.lots.filter(({ state, lines }) => state === 'draft' && lines.length > 0);
    const { zoneId } = from!.lines[0]!;
    const part = page.locator(`[data-part="${zoneId}"]`).first();
    const room = page.locator(`svg [data-drop="${to!.id}"] .room`);
    await part.scrollIntoViewIfNeeded();
    const [start, end] = [(await part.boundingBox())!, (await room.boundingBox())!];
    await page.mouse.move(start.x + start.width / 2, start.y + start.height / 2);
    await page.mouse.down();
    await page.mouse.move(end.x + end.width / 2, end.y + end.height / 3, { steps: 8 });
    await page.mouse.up();
    const holder = async () => (await board(page, estateId)).lots.find(({ lines }) => lines.some((line) => line.zoneId === zoneId))!.name;
    await expect.poll(holder).toBe(to!.name);
    await page.getByLabel('As known on').fill(new Date(Date.now() - 5 * 86_400_000).toISOString().slice(0, 10));
    await page.getByText(/^As it stood and was known on/).waitFor();
    expect(await page.getByRole('button', { name: 'Suggest lots' }).count()).toBe(0);
    await expectAccessible(page);
    await page.getByRole('button', { name: 'Show today' }).click();
    await page.getByRole('button', { name: 'Suggest lots' }).waitFor();
    await context.close();
  });

  it('shows what stops a pick date, who entered it and who may lift it', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/pick-board`);
    const stop = page.getByText(/Copper hydroxide \(21 days before harvest as typed\), no picking before .* Entered by Tessa Brand\./);
    const rose = (await board(page, estateId)).lots.find(({ stops }) => stops.length > 0);
    expect(rose?.stops[0]).toMatchObject({ kind: 'pick', setBy: 'Tessa Brand' });
    await stop.first().waitFor();
    await page.getByText(/A pre-harvest interval is not lifted by wish; Hester Vane or Tessa Brand may put the day right/).first().waitFor();
    await expectAccessible(page);
    await page.getByLabel('As known on').fill(new Date(Date.now() - 4 * 86_400_000).toISOString().slice(0, 10));
    await page.getByText(/^As it stood and was known on/).waitFor();
    await expect.poll(() => page.getByRole('button', { name: 'Set the room' }).count()).toBe(0);
    expect(await page.getByText(/may put the day right/).count()).toBe(0);
    await expectAccessible(page);
    await page.getByRole('button', { name: 'Show today' }).click();
    await page.getByRole('button', { name: 'Set the room' }).waitFor();
    await context.close();
  });

  it('lets the manager lift entry alone, and put a pre-harvest day right on a stated ground', async () => {
    const { page, context, estateId } = await app.signIn('manager');
    await page.goto(`${app.url}/e/${estateId}/restrictions`);
    const line = page.getByRole('row', { name: /Stile Piece/ });
    await line.click();
    await page.getByRole('button', { name: 'Lift entry early' }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByText(/The pre-harvest interval stays: no picking before/).waitFor();
    await dialog.getByLabel('Reason').fill('A burst pipe in row 4');
    await dialog.getByRole('button', { name: 'Lift entry early' }).click();
    await line.getByText('no picking yet').waitFor();
    await page.getByText(/Entry lifted .* by Tessa Brand: A burst pipe in row 4/).waitFor();
    await page.getByRole('button', { name: 'Put pre-harvest day right' }).click();
    await dialog.getByText('nobody lifts it by wish', { exact: false }).waitFor();
    await dialog.getByLabel('Nothing was applied here').check();
    await dialog.getByLabel('What the label or the spray record says').fill('The sprayer never reached this block');
    await expectAccessible(page);
    await dialog.getByRole('button', { name: 'Change the day' }).click();
    await page.getByText(/Nothing was applied here: The sprayer never reached this block/).waitFor();
    await line.getByText('lifted', { exact: true }).waitFor();
    await context.close();
  });

  it('shows an earlier season by its zones, without a forecast, and the way to potential alcohol with its figures', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/ripeness`);
    const season = page.getByLabel('Season', { exact: true });
    await page.getByRole('heading', { name: 'How many more' }).waitFor();
    const earlier = (await season.locator('option').allInnerTexts()).find((text, at) => at > 0 && !/no readings/.test(text))!;
    await season.selectOption({ label: earlier });
    await page.getByText(`Season ${earlier} is over.`).waitFor();
    expect(await page.getByRole('heading', { name: 'How many more' }).count()).toBe(0);
    await expectAccessible(page);
    await page.goto(`${app.url}/e/${estateId}/lots`);
    await page.getByLabel('Potential alcohol by').selectOption({ label: 'solids less 30 g/L, ÷ 16.83' });
    await page.getByText('% vol, by solids less 30 g/L').waitFor();
    expect((await board(page, estateId)).lots.flatMap(({ summary }) => summary.alcohol?.method ?? [])).toContain('solidsLessAllowance');
    await context.close();
  });

  it('gives the lot its tank and day, confirms it and sends its notice', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/lots`);
    await page.getByRole('button', { name: new RegExp(`^${lotName}`) }).first().click();
    // A proposal gives no day where none has room; the winemaker sets one.
    await page.getByLabel('Pick date', { exact: true }).fill(new Date(Date.now() + 25 * 86_400_000).toISOString().slice(0, 10));
    const tank = (await board(page, estateId)).tanks.reduce((largest, one) => (one.litres > largest.litres ? one : largest));
    await page.getByLabel('Tank', { exact: true }).selectOption({ label: tank.name });
    await page.getByLabel('Who picks').fill('north gang, 8 people');
    await page.getByRole('button', { name: 'Keep changes' }).click();
    await page.getByText(`“${lotName}” was kept.`).waitFor();
    expect((await board(page, estateId)).lots.find(({ name }) => name === lotName)?.tankId).toBe(tank.id);
    await expect.poll(() => page.locator('[data-line="tank"]').allInnerTexts()).toContainEqual(expect.stringMatching(/chance it fits/));
    await page.getByRole('button', { name: `Confirm ${lotName}` }).click();
    await page.getByRole('dialog').getByRole('button', { name: 'Confirm a lot' }).click();
    await page.getByText(`Lot “${lotName}” is confirmed.`).waitFor();
    await page.goto(`${app.url}/e/${estateId}/pick-board`);
    await page.getByRole('row', { name: new RegExp(lotName) }).first().click();
    await page.getByRole('button', { name: 'Write the pick notice' }).click();
    await page.getByRole('group', { name: 'Who must know' }).getByRole('checkbox').first().check();
    for (const box of await page.getByRole('group', { name: 'Who must know' }).getByRole('checkbox').all()) await box.check();
    await page.getByRole('button', { name: 'Send the notice' }).click();
    const said = await page.getByText(/Pick notice \d+ was sent/).innerText();
    noticeNumber = /\d+/.exec(said)![0];
    await expectAccessible(page);
    await context.close();
  });

  it('the manager confirms the notice and prints it', async () => {
    const { page, context, estateId } = await app.signIn('manager');
    await page.goto(`${app.url}/e/${estateId}/pick-board`);
    const paper = page.locator('article', { hasText: `Pick notice ${noticeNumber}` });
    await paper.getByRole('button', { name: 'I have read it' }).click();
    await paper.getByText(/Read by/).waitFor();
    const sheet = await printed(page, (await paper.getByRole('link', { name: /Print it with its code/ }).getAttribute('href'))!);
    expect(sheet.words).toContain(`Pick notice ${noticeNumber}`);
    // Where the machine has a program that draws the page, the code is read from the picture, as a phone reads it from paper.
    noticeCode = sheet.pictures && codeOn(sheet.pictures[0]!);
    await context.close();
  });

  it('a new day replaces the notice: what changed stands first, and the old number is void everywhere', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    const open = async (code: string) => page.goto(`${app.url}${new URL(code).pathname}`);
    if (noticeCode !== null) {
      await open(noticeCode);
      await page.getByText('In force', { exact: true }).waitFor();
    }
    await page.goto(`${app.url}/e/${estateId}/lots`);
    await page.getByRole('button', { name: new RegExp(`^${lotName}`) }).first().click();
    await page.getByLabel('Pick date', { exact: true }).fill(new Date(Date.now() + 26 * 86_400_000).toISOString().slice(0, 10));
    await page.getByRole('button', { name: 'Keep changes' }).click();
    await page.getByText(`“${lotName}” was kept.`).waitFor();
    await page.goto(`${app.url}/e/${estateId}/pick-board`);
    await page.getByRole('row', { name: new RegExp(lotName) }).first().click();
    await page.getByRole('button', { name: `Replace notice ${noticeNumber}` }).click();
    await page.getByRole('button', { name: 'Send the notice' }).click();
    const said = await page.getByText(/Pick notice \d+ was sent/).innerText();
    const newNumber = /\d+/.exec(said)![0];
    const paper = page.locator('article', { hasText: `Pick notice ${newNumber}` });
    expect((await paper.locator('p').first().innerText()).replace(/\s+/g, ' ')).toMatch(/^Changed: .*\(was .*\)$/);
    await page.locator('article', { hasText: `Pick notice ${noticeNumber}` }).getByText(`Void, replaced by ${newNumber}`).waitFor();
    if (noticeCode !== null) {
      await open(noticeCode);
      await page.getByText('Void', { exact: true }).waitFor();
      await page.getByText(new RegExp(`${newNumber}`)).first().waitFor();
    }
    await context.close();
  });

  it('the manager enters the ticket of the load, reads the review and prints the season letter', async () => {
    const { page, context, estateId } = await app.signIn('manager');
    await page.goto(`${app.url}/e/${estateId}/review`);
    await page.getByRole('button', { name: 'Enter a scale ticket' }).click();
    await page.getByLabel('Lot', { exact: true }).first().selectOption({ label: lotName });
    await page.getByLabel('Ticket number').fill('E2E-1');
    await page.getByLabel('Gross').fill('9000');
    await page.getByLabel('Tare').fill('3000');
    await page.getByRole('button', { name: 'Enter the ticket' }).click();
    await page.getByText('Ticket E2E-1 was entered.').waitFor();
    await page.getByRole('heading', { name: 'Did zones matter?' }).waitFor();
    await page.getByRole('heading', { name: 'Forecasts by zone, block and day' }).waitFor();
    await page.getByText(/few: says little/).first().waitFor();
    await page.getByText(/Not a contract weight/).first().waitFor();
    await expectAccessible(page);
    const link = page.getByRole('link', { name: /Season letter, PDF/ }).first();
    const letter = await printed(page, (await link.getAttribute('href'))!);
    expect(letter.pages).toHaveLength(1);
    expect(letter.words).toMatch(/Marlhaven/);
    expect(letter.words).toMatch(/\d+(\.\d+)? t\b/);
    expect(letter.words).not.toMatch(/undefined|NaN|\{\w+\}/);
    await context.close();
  });
});
