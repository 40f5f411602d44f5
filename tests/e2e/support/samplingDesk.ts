import type { Page } from 'playwright-core';
import { expect } from 'vitest';
import { decodeFloatCells } from '../../../shared/analysis/cellBytes.ts';
import { cellAt } from '../../../shared/analysis/grid.ts';
import type { CellsGrid } from '../../../shared/contracts/layers.ts';
import type { PlanView } from '../../../shared/contracts/plans.ts';
import { toUtm } from '../../../shared/geo/utm.ts';
import type { Application } from './application.ts';
import { readPrinted, type Printed } from './printed.ts';

const number = (words: string) => Number(words.replace(/\D/gu, ''));

/** Somebody who plans samples of one block, on the screen and beside it as their browser would ask. */
export class SamplingDesk {
  readonly app: Application;
  readonly page: Page;
  readonly estateId: string;
  readonly blockName: string;

  constructor(app: Application, { page, estateId, blockName }: { page: Page; estateId: string; blockName: string }) {
    [this.app, this.page, this.estateId, this.blockName] = [app, page, estateId, blockName];
  }

  async newPlan(): Promise<void> {
    await this.page.goto(`${this.app.url}/e/${this.estateId}/sampling`);
    await this.page.locator('select').first().selectOption({ label: this.blockName });
    await this.page.getByRole('link', { name: 'New plan' }).click();
    await this.page.getByRole('button', { name: 'Draw the vines' }).waitFor();
  }
  /** Only this measure in the plan. */
  async measureOnly(name: string): Promise<void> {
    await this.page.getByRole('button', { name: 'Other measures' }).click();
    await this.page.getByRole('checkbox', { name: `${name} in the plan` }).check();
    await this.page.getByRole('checkbox', { name: 'Clusters per vine in the plan' }).uncheck();
  }
  /** Vines in the sentence at the top. */
  async vinesAsked(): Promise<number> {
    return number(/^([\d  ]+) vines?/u.exec(await this.page.locator('h1').innerText())![1]!);
  }
  /** Vines to take by zone as the list says, and below it those of the block. */
  async vinesByZone(): Promise<{ zones: number[]; block: number }> {
    const all = (await this.page.getByRole('table').filter({ hasText: 'Expected result' }).locator('.take').allInnerTexts()).map(number);
    return { zones: all.slice(0, -1), block: all.at(-1)! };
  }
  async draw(): Promise<string> {
    await this.page.getByRole('button', { name: 'Draw the vines' }).click();
    await this.page.waitForURL(/\/plans\/[0-9a-f-]{36}$/);
    return this.planId();
  }
  async lock(): Promise<void> {
    await this.page.getByRole('button', { name: 'Lock plan' }).click();
    await this.page.getByRole('dialog').getByRole('button', { name: 'Lock plan' }).click();
    await this.page.waitForURL(/\/targets$/);
  }
  planId(): string {
    return /plans\/([0-9a-f-]{36})/.exec(this.page.url())![1]!;
  }
  /** Sends the locked plan that is open to these people. */
  async send(names: readonly string[]): Promise<void> {
    for (const name of names) await this.page.locator('form.assign').getByText(name).first().click();
    await this.page.getByRole('button', { name: /^Send/ }).click();
    await this.page.getByText(/ha(s|ve) a mail with the round/).waitFor();
  }
  /** What is printed by this button. */
  async print(button: string): Promise<Printed> {
    const [file] = await Promise.all([this.page.waitForEvent('download'), this.page.getByRole('button', { name: button, exact: true }).click()]);
    return readPrinted((await file.path())!);
  }
  async ask<Answer>(path: string, sent?: object): Promise<Answer> {
    const { csrfToken } = (await (await this.page.request.get(`${this.app.url}/api/session`)).json()) as { csrfToken: string };
    const answer = await (sent ? this.page.request.post(this.api(path), { headers: { 'x-csrf-token': csrfToken }, data: sent }) : this.page.request.get(this.api(path)));
    expect(answer.ok(), await answer.text()).toBe(true);
    return answer.json() as Promise<Answer>;
  }
  api(path: string): string {
    return `${this.app.url}/api/estates/${this.estateId}${path}`;
  }
  plan(): Promise<PlanView> {
    return this.ask(`/plans/${this.planId()}`);
  }
  /** What the block's layer of this type says at a place. */
  async layerValues(blockId: string, type: string): Promise<(position: readonly [number, number]) => number> {
    const { items } = await this.ask<{ items: { id: string; type: string }[] }>(`/blocks/${blockId}/layers`);
    const cells = await this.page.request.get(this.api(`/layers/${items.find((layer) => layer.type === type)!.id}/cells?block=${blockId}`));
    const values = decodeFloatCells(await cells.body());
    const grid = JSON.parse(cells.headers()['x-grid']!) as CellsGrid;
    return (position) => values[cellAt(grid, toUtm(position, grid.epsg))]!;
  }
}
