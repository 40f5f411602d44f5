import { useI18n } from 'vue-i18n';

/** Names of measures in the reader's language; a measure of the estate's own has the name it was given. */
export function useMeasureName(own: () => readonly { code: string; name: string }[] = () => []): (code: string) => string {
  const { t, te } = useI18n();
  return (code) => {
    const key = `measures.${code}`;
    return te(key) ? t(key) : own().find((measure) => measure.code === code)?.name || code;
  };
}
