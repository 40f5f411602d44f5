import { useI18n } from 'vue-i18n';
import { latLonText } from '../../shared/geo/latLonText.ts';

export interface NamedVine {
  readonly rowLabel: string;
  readonly vineNumber: number;
  /** Given where vines stand without rows. */
  readonly place?: readonly [lon: number, lat: number] | undefined;
}

/** A vine as people find it: by row and vine, or by coordinates where there are no rows. */
export function useVineName(): (vine: NamedVine) => string {
  const { t } = useI18n();
  return ({ rowLabel, vineNumber, place }) => (place ? latLonText(place) : t('field.rowVine', { row: rowLabel, vine: vineNumber }));
}
