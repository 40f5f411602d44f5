import { useI18n } from 'vue-i18n';
import { latLonText } from '../../shared/geo/latLonText.ts';

export interface NamedVine {
  readonly rowLabel: string;
  readonly vineNumber: number;
  /** Given where vines stand without rows. */
  readonly place?: readonly [lon: number, lat: number] | undefined;
}

/** A vine as people find it: by row and vine, or by coordinates where there are no rows. `within`: as a sentence goes on with it. */
export function useVineName(): (vine: NamedVine, within?: 'within') => string {
  const { t } = useI18n();
  return ({ rowLabel, vineNumber, place }, within) => (place ? latLonText(place) : t(within ? 'field.rowVineWithin' : 'field.rowVine', { row: rowLabel, vine: vineNumber }));
}
