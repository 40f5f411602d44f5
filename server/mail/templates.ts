import { mailTexts } from './texts.ts';

export type MailKind = keyof (typeof mailTexts)['en'];

/** Subject and plain text in the reader's language. Facts fill `{names}`; a missing fact is a fault, not an empty place. */
export function composeMail(kind: MailKind, language: string, facts: Record<string, string | number>): { subject: string; text: string } {
  const texts = mailTexts[language as keyof typeof mailTexts] ?? mailTexts.en;
  const fill = (template: string) =>
    template.replace(/\{(\w+)\}/g, (_, key: string) => {
      const value = facts[key];
      if (value === undefined) throw new Error(`Mail "${kind}" lacks the fact "${key}"`);
      return String(value);
    });
  return { subject: fill(texts[kind].subject), text: fill(texts[kind].text) };
}
