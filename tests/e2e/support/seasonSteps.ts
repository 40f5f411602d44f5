import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Page } from 'playwright-core';
import { expect } from 'vitest';
import type { LabBench } from '../../../shared/contracts/lab.ts';
import type { LotsBoard } from '../../../shared/contracts/lots.ts';
import type { RipeningView } from '../../../shared/contracts/results.ts';
import type { ReviewView } from '../../../shared/contracts/tickets.ts';
import { readPrinted, type Printed } from './printed.ts';

/** What the server holds, to lay beside what the screens of a season say. */
const read = async <T>(page: Page, path: string) => (await (await page.request.get(new URL(`/api/estates/${path}`, page.url()).href)).json()) as T;
export const boardOf = (page: Page, estateId: string, scenario?: string) => read<LotsBoard>(page, `${estateId}/lots${scenario ? `?scenario=${scenario}` : ''}`);
export const benchOf = (page: Page, estateId: string) => read<LabBench>(page, `${estateId}/lab`);
export const reviewOf = (page: Page, estateId: string) => read<ReviewView>(page, `${estateId}/review`);
export const ripeningOf = (page: Page, estateId: string, blockId: string) => read<RipeningView>(page, `${estateId}/blocks/${blockId}/ripening`);

/** Sugar of a zone on the last day it was read. */
export const newestSugar = ({ values }: RipeningView, zone: number) => values.filter((value) => value.measure === 'brix' && value.zone === zone).sort((a, b) => b.visit.localeCompare(a.visit))[0]!;

/** A day so many days from now, as a date field takes it. */
export const dayFromNow = (days: number) => new Date(Date.now() + days * 86_400_000).toISOString().slice(0, 10);

/** A PDF behind a link of the screen, as whoever prints it gets it. */
export async function printedBehind(page: Page, href: string): Promise<Printed> {
  const answer = await page.request.get(new URL(href, page.url()).href);
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

/** How many more, line by line: each figure of the screen is that of the server, and the foot is their sum. */
export async function expectHowManyMore(page: Page, view: RipeningView): Promise<void> {
  const table = page.getByRole('table', { name: 'How many more' });
  for (const zone of view.zones) {
    const value = newestSugar(view, zone.number);
    const line = await table.getByRole('row').nth(zone.number).innerText();
    expect(line).toContain(value.mean.toFixed(1));
    expect(line).toMatch(new RegExp(`n ${value.n}\\b`));
    expect(line.trim().split(/\s+/).at(-1)).toBe(value.more === 0 ? 'none' : String(value.more));
  }
  const total = view.zones.reduce((sum, { number }) => sum + newestSugar(view, number).more!, 0);
  await table.getByText(new RegExp(`^${total} readings?, `)).waitFor();
}

const refusals = /No date for 26\.0 °Brix: (the trend is not clear|the trend leads away from it|four visits are needed|by the trend it would take more than a year)\.|26\.0 °Brix not before .* how late cannot be told\.|no forecast\./;

/** A date where the straight line through the visits meets 26 °Brix, within a range of dates around it; or the reason why none is given. */
export async function expectForecastOf26(page: Page, view: RipeningView): Promise<void> {
  for (const { number, name } of view.zones) {
    const words = (await page.locator('p', { hasText: `Zone ${number}, ${name}:` }).first().innerText()).replace(/\s+/g, ' ');
    const trend = view.series.find((one) => one.zone === number && one.measure === 'brix')?.trend;
    const dates = /26\.0 °Brix (?:about|was reached about) (.+?), between (.+?) and (.+?) \(95 %\)/.exec(words);
    if (dates === null) expect(words).toMatch(refusals);
    else {
      if (trend?.kind !== 'trend') throw new Error(`Zone ${number} has dates without a trend`);
      // A day of another year than the newest visit's says its year.
      const thisYear = newestSugar(view, number).visit.slice(0, 4);
      const [about, from, to] = dates.slice(1).map((day) => Date.parse(`${/\d{4}$/.test(day) ? day : `${day} ${thisYear}`} UTC`) / 86_400_000) as [number, number, number];
      expect(about).toBe(Math.round(trend.meanDay + (26 - trend.meanValue) / trend.slope));
      expect([from < about, about < to]).toEqual([true, true]);
    }
  }
}

/** A station's table of hot and wet days is brought by hand; the visit of its last day then carries both flags, on the server and on the screen. */
export async function bringHeatAndRain(page: Page, at: { url: string; estateId: string; blockId: string; visit: string }): Promise<void> {
  const [before, dayBefore] = [2, 1].map((days) => new Date(Date.parse(at.visit) - days * 86_400_000).toISOString().slice(0, 10));
  await page.goto(`${at.url}/e/${at.estateId}/weather`);
  await page.getByLabel('Or paste the table here').fill(`date,max °C,min °C,rain mm\n${before},36.4,18,0\n${dayBefore},31,17,4.5\n${at.visit},27,15,3\n`);
  await page.getByRole('button', { name: 'Read it back' }).click();
  await page.getByRole('button', { name: /^Keep 3 days/ }).click();
  await page.locator('#main').getByText('3 days are kept.').waitFor();
  const conditions = (await ripeningOf(page, at.estateId, at.blockId)).conditions.find(({ visit }) => visit === at.visit);
  expect(conditions).toMatchObject({ rainMm: 7.5, maxC: 36.4 });
  expect(conditions?.flags).toEqual(expect.arrayContaining(['rain', 'heat']));
  await page.goto(`${at.url}/e/${at.estateId}/blocks/${at.blockId}/ripeness`);
  await page.getByText('up to 36 °C in three days').waitFor();
  await page.getByText('8 mm of rain in three days').waitFor();
}
