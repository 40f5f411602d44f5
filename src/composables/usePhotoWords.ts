import { useI18n } from 'vue-i18n';

const words: Readonly<Record<string, 'missing' | 'picture' | 'tooLarge'>> = { missing: 'missing', notFound: 'missing', noPhoto: 'picture', badUpload: 'picture', fileTooLarge: 'tooLarge' };

/** Why the server did not take a photo, in the reader's language; its own sentence only where the code is none that a phone meets. */
export function usePhotoWords(): (photo: { readonly refusal?: string; readonly refusalCode?: string }) => string {
  const { t } = useI18n();
  return ({ refusal = '', refusalCode = '' }) => t(`field.photoRefusal.${words[refusalCode] ?? 'other'}`, { reason: refusal });
}
