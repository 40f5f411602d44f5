import { computed, ref, watch, type ComputedRef, type Ref } from 'vue';
import { useI18n } from 'vue-i18n';
import { useRouter, type RouteLocationRaw } from 'vue-router';
import type { Found } from '../../shared/contracts/search.ts';
import { matchScore } from '../../shared/search/matchScore.ts';
import type { FoundLine } from '../components/frame/FindDialog.vue';
import type { IconName } from '../components/base/iconPaths.ts';
import type { HttpProblem } from '../lib/httpProblem.ts';
import type { RouteName } from '../router/routeNames.ts';
import { useAsk } from './useAsk.ts';
import { useFormat } from './useFormat.ts';

const restMs = 200;
const placesShown = 4;
const icons: Readonly<Record<Found['kind'], IconName>> = { block: 'block', zone: 'zone', lot: 'lot', person: 'person', round: 'row', layer: 'layers', bag: 'bag' };

interface Door {
  find: (typed: string) => Promise<Found[]>;
  /** Places of the product the person may open, by name. */
  places: () => readonly RouteName[];
  estateId: () => string;
  /** True for people who walk rounds: a round opens on the phone's screen. */
  walks: () => boolean;
}

export interface Find {
  isOpen: Ref<boolean>;
  typed: Ref<string>;
  results: ComputedRef<FoundLine[] | null>;
  isBusy: Ref<boolean>;
  problem: Ref<HttpProblem | null>;
  go: (key: string) => void;
}

/** Finding from the masthead: things of the estate by the server, places of the product here, in one list. */
export function useFind(door: Door): Find {
  const { t } = useI18n();
  const router = useRouter();
  const format = useFormat();
  const [isOpen, typed] = [ref(false), ref('')];
  const asking = useAsk(door.find);
  let timer: ReturnType<typeof setTimeout> | undefined;

  watch(typed, () => {
    clearTimeout(timer);
    if (typed.value.trim() !== '') timer = setTimeout(() => void asking.run(typed.value.trim()), restMs);
  });
  watch(isOpen, (open) => open && ((typed.value = ''), (asking.data.value = null)));

  const places = computed(() =>
    door.places()
      .map((name) => ({ name, label: t(`frame.place.${name}`), score: matchScore(t(`frame.place.${name}`), typed.value) }))
      .filter(({ score }) => score > 0)
      .sort((one, other) => other.score - one.score)
      .slice(0, placesShown),
  );
  const things = computed(() => (typed.value.trim() === '' ? [] : (asking.data.value ?? [])));
  const results = computed<FoundLine[] | null>(() => {
    if (typed.value.trim() === '' || (asking.data.value === null && asking.problem.value === null)) return null;
    return [
      ...things.value.map((one) => ({ key: `${one.kind} ${one.id}${one.to ?? ''}`, icon: icons[one.kind], kind: t(`frame.foundKind.${one.kind}`), name: one.name, about: /^\d{4}-\d{2}-\d{2}$/.test(one.about) ? format.date(one.about) : one.about })),
      ...places.value.map(({ name, label }) => ({ key: `place ${name}`, icon: 'forward' as const, kind: t('frame.foundKind.place'), name: label, about: '' })),
    ];
  });

  function addressOf(key: string): RouteLocationRaw | null {
    const estateId = door.estateId();
    const place = places.value.find(({ name }) => `place ${name}` === key);
    if (place) return { name: place.name, params: { estateId } };
    const thing = things.value.find((one) => `${one.kind} ${one.id}${one.to ?? ''}` === key);
    if (!thing) return null;
    const to = thing.to ?? '';
    const addresses: Record<Found['kind'], RouteLocationRaw> = {
      block: { name: 'block', params: { estateId, blockId: to } },
      zone: { name: 'block', params: { estateId, blockId: to } },
      lot: { name: 'lot', params: { estateId, lotId: to } },
      person: { name: 'people', params: { estateId }, query: { person: to } },
      round: door.walks() ? { name: 'fieldWalk', params: { estateId, roundId: to } } : { name: 'targets', params: { estateId, planId: to } },
      layer: { name: 'layer', params: { estateId, blockId: to, layerId: thing.id } },
      bag: { name: 'lab', params: { estateId }, query: { bag: thing.name } },
    };
    return addresses[thing.kind];
  }

  function go(key: string): void {
    const address = addressOf(key);
    isOpen.value = false;
    if (address) void router.push(address);
  }

  return { isOpen, typed, results, isBusy: asking.isBusy, problem: asking.problem, go };
}
