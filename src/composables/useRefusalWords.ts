import { useI18n } from 'vue-i18n';
import type { Refusal } from '../../shared/contracts/readings.ts';

/** Why the server did not take something, in the reader's language; its own sentence where it gave no code. */
export function useRefusalWords(): (outcome: { readonly code?: Refusal['code'] | undefined; readonly facts?: Refusal['facts'] | undefined; readonly reason: string | null } | null) => string {
  const { t } = useI18n();
  return (outcome) => t('field.refusedBy', { reason: outcome?.code ? t(`field.refusal.${outcome.code}`, { ...outcome.facts }) : (outcome?.reason ?? '') });
}
