import { onBeforeUnmount, onMounted, ref, shallowRef, watch, type Ref, type ShallowRef } from 'vue';
import type { PhonePlace } from '../../shared/field/roughPlace.ts';
import { readStored, writeStored } from '../lib/deviceStore.ts';

/** What the person said when asked: null until then. Kept for the device. */
const wish = ref(readStored<boolean>('fieldPlace'));

function choose(isWanted: boolean): void {
  wish.value = isWanted;
  writeStored('fieldPlace', isWanted);
}

export interface RoughPlaceWatch {
  place: ShallowRef<PhonePlace | null>;
  wish: Ref<boolean | null>;
  /** False where the browser has no place to give. */
  canTell: boolean;
  choose: (isWanted: boolean) => void;
}

/**
 * The phone's place while this screen is looked at, if the person wants it. It lives in this variable and nowhere else: it
 * is not stored, not sent, and forgotten when the screen closes or sleeps.
 */
export function useRoughPlace(): RoughPlaceWatch {
  const place = shallowRef<PhonePlace | null>(null);
  let watching: number | null = null;

  function stop(): void {
    if (watching !== null) navigator.geolocation.clearWatch(watching);
    [watching, place.value] = [null, null];
  }
  function look(): void {
    stop();
    if (wish.value !== true || !canTellPlace || document.visibilityState !== 'visible') return;
    watching = navigator.geolocation.watchPosition(
      ({ coords }) => (place.value = { lon: coords.longitude, lat: coords.latitude, accuracyM: coords.accuracy }),
      (error) => {
        place.value = null;
        if (error.code === error.PERMISSION_DENIED) choose(false);
      },
      { enableHighAccuracy: true, maximumAge: 10_000 },
    );
  }

  watch(wish, look);
  onMounted(() => {
    document.addEventListener('visibilitychange', look);
    look();
  });
  onBeforeUnmount(() => {
    document.removeEventListener('visibilitychange', look);
    stop();
  });
  return { place, wish, canTell: canTellPlace, choose };
}

const canTellPlace = typeof navigator !== 'undefined' && 'geolocation' in navigator;
