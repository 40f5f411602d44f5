import type { Page } from 'playwright-core';
import { expect } from 'vitest';
import type { PlanView } from '../../../shared/contracts/plans.ts';
import { readMap } from './mapContents.ts';

type Place = readonly [number, number];

/** The map holds and draws a line for each walk, in a stroke of its own; each begins where the walk is to begin, and every vine of the plan lies beside one of them. */
export async function expectWalks(page: Page, { targets }: PlanView, people: number): Promise<void> {
  const ids = Array.from({ length: people }, (_, index) => `walk-${index}`);
  await page.locator('.estate-map[data-ready="true"]').scrollIntoViewIfNeeded();
  for (const [index, id] of ids.entries()) await expect.poll(async () => (await readMap(page, 'lines', `route-${index}`))?.drawnIds, { timeout: 30_000 }).toEqual([id]);
  const { held } = (await readMap(page, 'lines', 'route-0'))!;
  expect(held.map(({ properties }) => properties.id)).toEqual(ids);
  const paths = held.map(({ geometry }) => geometry.coordinates as Place[]);
  const farM = targets.map(({ position }) => Math.min(...paths.map((path) => metresToPath(position, path))));
  expect(Math.max(...farM)).toBeLessThan(3);
  const { held: points } = (await readMap(page, 'points', 'route-0'))!;
  expect(new Set(points.map(({ properties }) => properties.id))).toEqual(new Set([...targets.map(({ id }) => id), 'gate']));
  const [gate] = points.filter(({ properties }) => properties.id === 'gate').map(({ geometry }) => geometry.coordinates as Place);
  for (const path of paths) expect(metresToPath(gate!, path.slice(0, 2))).toBeLessThan(3);
}

/** On a plane touching the ground at the place: exact enough within a block. */
function metresToPath([lon, lat]: Place, path: readonly Place[]): number {
  const metres = ([x, y]: Place) => [(x - lon) * 111_320 * Math.cos((lat * Math.PI) / 180), (y - lat) * 110_574] as const;
  return Math.min(...path.slice(1).map((to, index) => {
    const [[ax, ay], [bx, by]] = [metres(path[index]!), metres(to)];
    const along = Math.min(1, Math.max(0, -(ax * (bx - ax) + ay * (by - ay)) / ((bx - ax) ** 2 + (by - ay) ** 2 || 1)));
    return Math.hypot(ax + along * (bx - ax), ay + along * (by - ay));
  }));
}
