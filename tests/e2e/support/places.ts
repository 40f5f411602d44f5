import type { APIRequestContext } from 'playwright-core';
import { routePlaces, type RouteName } from '../../../src/router/routeNames.ts';
import { views } from '../../../src/router/views.ts';

/** Every place of the application that has a view, with an address on the demo estate. */

export interface Place {
  readonly name: RouteName;
  readonly role: 'owner' | 'crew' | 'nobody';
  readonly path: string;
}

type Ids = Record<string, string>;

/** Addresses made of one thing each; the first of its kind that the estate lists stands for all. */
export async function findIds(request: APIRequestContext, url: string, estateId: string): Promise<Ids> {
  const read = async (path: string) => (await (await request.get(`${url}/api/estates/${estateId}${path}`)).json()) as Record<string, { id: string; status?: string }[]>;
  const first = async (path: string, list = 'items', wanted: (item: { status?: string }) => boolean = () => true) => {
    const found = (await read(path))[list]?.find(wanted) ?? (await read(path))[list]?.[0];
    if (found === undefined) throw new Error(`The demo estate lists nothing at ${path}`);
    return found.id;
  };
  const blockId = await first('/blocks');
  return {
    estateId,
    blockId,
    layerId: await first(`/blocks/${blockId}/layers`),
    zoningId: await first(`/blocks/${blockId}/zonings`),
    planId: await first('/plans'),
    roundId: await first('/rounds'),
    lotId: await first('/lots', 'lots'),
    token: 'a-link-that-has-ended',
    code: '00000000-0000-4000-8000-000000000000',
    rest: 'nowhere',
  };
}

/** Throws when a place asks for an id that is not known here, so that a new screen cannot stay unseen. */
export function placesWithViews(ids: Ids): Place[] {
  return (Object.keys(views) as RouteName[])
    .filter((name) => name !== 'home')
    .map((name) => {
      const { path, frame } = routePlaces[name];
      const role = frame === 'field' ? 'crew' : frame === 'door' ? 'nobody' : 'owner';
      return { name, role, path: path.replace(/:(\w+)(\(.*?\))?\*?/g, (_, id: string) => ids[id] ?? fail(name, id)) };
    });
}

function fail(name: string, id: string): never {
  throw new Error(`The place ${name} asks for ${id}: say in places.ts where one is found`);
}
