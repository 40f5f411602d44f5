import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { spellLabelCode } from '../../shared/field/labelCode.ts';
import { expectAccessible } from './support/accessible.ts';
import { startApplication, type Application } from './support/application.ts';
import { codeOn } from './support/printed.ts';
import { benchOf, boardOf, bringHeatAndRain, dayFromNow, expectForecastOf26, expectHowManyMore, newestSugar, printedBehind, reviewOf, ripeningOf } from './support/seasonSteps.ts';

let app: Application;

beforeAll(async () => {
  app = await startApplication();
}, 600_000);
afterAll(() => app?.close());

let blockId = '';
let lotName = '';
let noticeNumber = '';
let newNumber = '';
let noticeCode: string | null = null;

describe('from results to the season’s review', () => {
  it('the lab types the results of a bag and checks them, and only then does ripeness count them', async () => {
    const { page, context, estateId } = await app.signIn('lab');
    const bench = () => benchOf(page, estateId);
    const bag = (await bench()).bags.find(({ place, results }) => place === 'here' && results === 0)!;
    blockId = bag.blockId!;
    const before = await ripeningOf(page, estateId, blockId);
    await page.goto(`${app.url}/e/${estateId}/lab`);
    await page.getByText('Type results', { exact: true }).first().click();
    await page.getByRole('row', { name: new RegExp(spellLabelCode(bag.code)) }).locator('input').first().focus();
    await page.keyboard.type('23,9');
    await page.keyboard.press('Control+Enter');
    await page.getByText('1 result is stored as provisional.').waitFor();
    const typed = (await bench()).results.find(({ bagId, measureCode }) => bagId === bag.id && measureCode === 'brix')!;
    expect(typed).toMatchObject({ value: 23.9, state: 'provisional' });
    expect((await ripeningOf(page, estateId, blockId)).values).toEqual(before.values);
    await page.getByText('Check results', { exact: true }).first().click();
    await page.getByRole('button', { name: /^Mark \d+ as checked/ }).click();
    await expect.poll(async () => (await bench()).results.find(({ id }) => id === typed.id)?.state).toBe('checked');
    const after = await ripeningOf(page, estateId, blockId);
    const counted = (view: typeof before) => view.zones.reduce((sum, { number }) => sum + newestSugar(view, number).n, 0);
    expect(counted(after)).toBeGreaterThan(counted(before));
    await context.close();
  });

  it('the winemaker reads results, how many more, a forecast with its dates, and what the weather did', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/blocks/${blockId}/ripeness`);
    await page.getByRole('heading', { name: 'How many more' }).waitFor({ timeout: 60_000 });
    const view = await ripeningOf(page, estateId, blockId);
    await expectHowManyMore(page, view);
    await page.getByLabel('Way on this screen').selectOption({ label: 'sugar by the OIV table, ÷ 16.83' });
    await page.getByText(/Potential alcohol: sugar of must by the OIV table.*not the alcohol of a label/).waitFor();
    await page.getByText('mm of rain in three days').first().waitFor();
    await page.getByText(/degree days above 10 °C/).waitFor();
    await page.getByLabel('Your target').fill('26');
    await page.getByLabel('Your target').press('Tab');
    await expect.poll(() => page.getByText(/26\.0 °Brix/).count()).toBeGreaterThan(0);
    await expectForecastOf26(page, view);
    await page.getByText(/When ripening flattens, a straight line runs ahead/).waitFor();
    await expectAccessible(page);
    await page.goto(`${app.url}/e/${estateId}/weather`);
    await page.getByLabel('Or paste the table here').fill('date,max,min\n03/09/2026,28,14\n');
    await page.getByRole('button', { name: 'Read it back' }).click();
    await page.getByText('How are the dates written?').waitFor();
    await expectAccessible(page);
    await bringHeatAndRain(page, { url: app.url, estateId, blockId, visit: view.visits.at(-1)!.on });
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
    const live = await boardOf(page, estateId);
    expect(live.lots.some(({ name }) => name.endsWith(' 1'))).toBe(false);
    const whatIf = live.scenarios.find(({ isLive }) => !isLive)!;
    const proposal = await boardOf(page, estateId, whatIf.id);
    lotName = proposal.suggestion!.lots[0]!.lotName;
    const free = proposal.zones.find(({ freeShare }) => freeShare > 0.99)!;
    await page.getByRole('row', { name: new RegExp(`${free.blockName}.*${free.name}`) }).first().click();
    await page.getByRole('button', { name: lotName, exact: true }).last().click();
    await page.getByText(`${free.blockName} zone ${free.number} is in ${lotName}.`).waitFor();
    await page.getByRole('button', { name: `Take out of ${lotName}` }).click();
    await page.getByText(`${free.blockName} zone ${free.number} is out of ${lotName}.`).waitFor();
    await page.getByRole('button', { name: lotName, exact: true }).last().click();
    await expect.poll(async () => (await boardOf(page, estateId, whatIf.id)).lots.find(({ name }) => name === lotName)?.lines.map(({ zoneId }) => zoneId)).toContain(free.zoneId);
    await page.getByRole('button', { name: 'Side by side' }).click();
    await page.getByRole('button', { name: 'Show them' }).click();
    await page.getByText('Chance that every lot fits its tank').waitFor();
    await page.getByRole('button', { name: 'Put in force' }).click();
    await page.getByRole('dialog').getByRole('button', { name: 'Put in force' }).click();
    await page.getByText(/is in force now/).waitFor();
    const inForce = (await boardOf(page, estateId)).lots.find(({ name }) => name === lotName)!;
    expect(inForce.lines.map(({ zoneId }) => zoneId)).toContain(free.zoneId);
    await context.close();
  });

  it('moves a zone between lots by dragging, and looks at the lots as they stood', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/lots`);
    const before = await boardOf(page, estateId);
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
    const holder = async () => (await boardOf(page, estateId)).lots.find(({ lines }) => lines.some((line) => line.zoneId === zoneId))!.name;
    await expect.poll(holder).toBe(to!.name);
    await page.getByLabel('As known on').fill(dayFromNow(-5));
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
    const rose = (await boardOf(page, estateId)).lots.find(({ stops }) => stops.length > 0);
    expect(rose?.stops[0]).toMatchObject({ kind: 'pick', setBy: 'Tessa Brand' });
    await stop.first().waitFor();
    await page.getByText(/A pre-harvest interval is not lifted by wish; Hester Vane or Tessa Brand may put the day right/).first().waitFor();
    await expectAccessible(page);
    await page.getByLabel('As known on').fill(dayFromNow(-4));
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
    expect((await boardOf(page, estateId)).lots.flatMap(({ summary }) => summary.alcohol?.method ?? [])).toContain('solidsLessAllowance');
    await context.close();
  });

  it('gives the lot its tank and day, confirms it and sends its notice', async () => {
    const { page, context, estateId } = await app.signIn('winemaker');
    await page.goto(`${app.url}/e/${estateId}/lots`);
    await page.getByRole('button', { name: new RegExp(`^${lotName}`) }).first().click();
    // A proposal gives no day where none has room; the winemaker sets one.
    await page.getByLabel('Pick date', { exact: true }).fill(dayFromNow(25));
    const tank = (await boardOf(page, estateId)).tanks.reduce((largest, one) => (one.litres > largest.litres ? one : largest));
    await page.getByLabel('Tank', { exact: true }).selectOption({ label: tank.name });
    await page.getByLabel('Who picks').fill('north gang, 8 people');
    await page.getByRole('button', { name: 'Keep changes' }).click();
    await page.getByText(`“${lotName}” was kept.`).waitFor();
    expect((await boardOf(page, estateId)).lots.find(({ name }) => name === lotName)?.tankId).toBe(tank.id);
    await expect.poll(() => page.locator('[data-line="tank"]').allInnerTexts()).toContainEqual(expect.stringMatching(/chance it fits/));
    await page.getByRole('button', { name: `Confirm ${lotName}` }).click();
    await page.getByRole('dialog').getByRole('button', { name: 'Confirm a lot' }).click();
    await page.getByText(`Lot “${lotName}” is confirmed.`).waitFor();
    await page.goto(`${app.url}/e/${estateId}/pick-board`);
    await page.getByRole('row', { name: new RegExp(lotName) }).first().click();
    await page.getByRole('button', { name: 'Write the pick notice' }).click();
    await page.getByRole('group', { name: 'Who must know' }).getByRole('checkbox').first().waitFor();
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
    const sheet = await printedBehind(page, (await paper.getByRole('link', { name: /Print it with its code/ }).getAttribute('href'))!);
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
    await page.getByLabel('Pick date', { exact: true }).fill(dayFromNow(26));
    await page.getByRole('button', { name: 'Keep changes' }).click();
    await page.getByText(`“${lotName}” was kept.`).waitFor();
    await page.goto(`${app.url}/e/${estateId}/pick-board`);
    await page.getByRole('row', { name: new RegExp(lotName) }).first().click();
    await page.getByRole('button', { name: `Replace notice ${noticeNumber}` }).click();
    await page.getByRole('button', { name: 'Send the notice' }).click();
    const said = await page.getByText(/Pick notice \d+ was sent/).innerText();
    newNumber = /\d+/.exec(said)![0];
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

  it('the manager, who knows the old notice, is asked to read the new one', async () => {
    const { page, context, estateId } = await app.signIn('manager');
    await page.goto(`${app.url}/e/${estateId}/pick-board`);
    const paper = (number: string) => page.locator('article', { hasText: `Pick notice ${number}` });
    await paper(newNumber).getByText(/^0 of \d+ have read it$/).waitFor();
    expect(await paper(noticeNumber).getByRole('button', { name: 'I have read it' }).count()).toBe(0);
    await paper(newNumber).getByRole('button', { name: 'I have read it' }).click();
    await paper(newNumber).getByText(/^1 of \d+ have read it$/).waitFor();
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
    const { blockId: weighed } = (await boardOf(page, estateId)).lots.find(({ name }) => name === lotName)!.lines[0]!;
    const block = (await reviewOf(page, estateId)).blocks.find((one) => one.blockId === weighed)!;
    const letter = await printedBehind(page, (await page.locator(`a[href*="${weighed}/season-letter"]`).first().getAttribute('href'))!);
    expect(letter.pages).toHaveLength(1);
    expect(letter.words).toContain(`Season letter: ${block.blockName}`);
    expect(letter.words).not.toContain('Nothing was weighed for this block');
    const sugar = block.measures.find(({ measure }) => measure === 'brix')!;
    expect(letter.words).toContain(`${sugar.difference.toFixed(1)} ± ${sugar.halfWidth!.toFixed(1)}`);
    expect(letter.words).toContain(`${block.readings} readings`);
    expect(letter.words).toContain('Not a contract weight, not a legal declaration.');
    expect(letter.words).not.toMatch(/undefined|NaN|\{\w+\}/);
    await context.close();
  });
});
