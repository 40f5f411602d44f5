import type { Role } from '../../shared/catalog/roles.ts';

/** Roles as a mail names them. Translations need a native reader before release. */
const words: Record<string, Record<Role, string>> = {
  en: { owner: 'owner', admin: 'admin', agronomist: 'agronomist', manager: 'manager', winemaker: 'winemaker', crew: 'crew', lab: 'lab', guest: 'guest' },
  es: { owner: 'propietario/a', admin: 'administrador/a', agronomist: 'técnico/a vitícola', manager: 'encargado/a de viñedo', winemaker: 'enólogo/a', crew: 'cuadrilla', lab: 'laboratorio', guest: 'invitado/a' },
  fr: { owner: 'propriétaire', admin: 'administrateur·rice', agronomist: 'technicien·ne viticole', manager: 'responsable du vignoble', winemaker: 'œnologue', crew: 'équipe', lab: 'laboratoire', guest: 'invité·e' },
  it: { owner: 'titolare', admin: 'amministratore/trice', agronomist: 'tecnico viticolo', manager: 'responsabile del vigneto', winemaker: 'enologo/a', crew: 'squadra', lab: 'laboratorio', guest: 'ospite' },
  pt: { owner: 'proprietário/a', admin: 'administrador/a', agronomist: 'técnico/a de viticultura', manager: 'responsável da vinha', winemaker: 'enólogo/a', crew: 'equipa', lab: 'laboratório', guest: 'convidado/a' },
};

/** Several roles in one phrase of the reader's language. */
export function rolePhrase(roles: readonly Role[], language: string): string {
  const known = words[language] ?? words.en!;
  return new Intl.ListFormat(language in words ? language : 'en', { type: 'conjunction' }).format(roles.map((role) => known[role]));
}
