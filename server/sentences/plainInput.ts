import type { z } from 'zod';
import type { Language } from '../../shared/contracts/common.ts';

type Issue = z.core.$ZodIssue;

/** What is wrong with one place of the input where its contract has no sentence of its own, said as an office would say it; {n}, {list} and {form} are filled in. */
const sentences = {
  en: {
    least: 'Give {n} or more.', above: 'Give more than {n}.', most: 'Give {n} or less.', below: 'Give less than {n}.',
    leastLetters: 'Characters wanted: {n} or more.', mostLetters: 'Characters allowed: {n} or fewer.', empty: 'This must not be empty.',
    leastEntries: 'Entries wanted: {n} or more.', oneEntry: 'Give at least one entry.', mostEntries: 'Entries allowed: {n} or fewer.',
    missing: 'This is missing.', number: 'Give a number.', whole: 'Give a whole number.', text: 'Give a text.', yesNo: 'Give true or false.', list: 'Give a list.',
    day: 'Give a day such as 2026-09-14.', moment: 'Give a day and time such as 2026-09-14T07:00:00Z.', email: 'Give an e-mail address.', form: 'This has not the form that is expected ({form}).',
    oneOf: 'Choose one of: {list}.', extra: 'There is no field of this name here: {list}.',
  },
  es: {
    least: 'Indique {n} o más.', above: 'Indique más de {n}.', most: 'Indique {n} o menos.', below: 'Indique menos de {n}.',
    leastLetters: 'Caracteres necesarios: {n} o más.', mostLetters: 'Caracteres permitidos: {n} o menos.', empty: 'No puede quedar vacío.',
    leastEntries: 'Elementos necesarios: {n} o más.', oneEntry: 'Indique al menos un elemento.', mostEntries: 'Elementos permitidos: {n} o menos.',
    missing: 'Esto falta.', number: 'Indique un número.', whole: 'Indique un número entero.', text: 'Indique un texto.', yesNo: 'Indique true o false.', list: 'Indique una lista.',
    day: 'Indique un día, por ejemplo 2026-09-14.', moment: 'Indique día y hora, por ejemplo 2026-09-14T07:00:00Z.', email: 'Indique una dirección de correo.', form: 'No tiene la forma esperada ({form}).',
    oneOf: 'Elija uno de: {list}.', extra: 'Aquí no hay ningún campo con este nombre: {list}.',
  },
  fr: {
    least: 'Indiquez {n} ou plus.', above: 'Indiquez plus de {n}.', most: 'Indiquez {n} ou moins.', below: 'Indiquez moins de {n}.',
    leastLetters: 'Caractères attendus : {n} ou plus.', mostLetters: 'Caractères permis : {n} ou moins.', empty: 'Ceci ne peut pas rester vide.',
    leastEntries: 'Éléments attendus : {n} ou plus.', oneEntry: 'Indiquez au moins un élément.', mostEntries: 'Éléments permis : {n} ou moins.',
    missing: 'Ceci manque.', number: 'Indiquez un nombre.', whole: 'Indiquez un nombre entier.', text: 'Indiquez un texte.', yesNo: 'Indiquez true ou false.', list: 'Indiquez une liste.',
    day: 'Indiquez un jour, par exemple 2026-09-14.', moment: 'Indiquez un jour et une heure, par exemple 2026-09-14T07:00:00Z.', email: 'Indiquez une adresse électronique.', form: 'Ceci n’a pas la forme attendue ({form}).',
    oneOf: 'Choisissez parmi : {list}.', extra: 'Il n’y a pas ici de champ de ce nom : {list}.',
  },
  it: {
    least: 'Indichi {n} o più.', above: 'Indichi più di {n}.', most: 'Indichi {n} o meno.', below: 'Indichi meno di {n}.',
    leastLetters: 'Caratteri attesi: {n} o più.', mostLetters: 'Caratteri permessi: {n} o meno.', empty: 'Non può restare vuoto.',
    leastEntries: 'Elementi attesi: {n} o più.', oneEntry: 'Indichi almeno un elemento.', mostEntries: 'Elementi permessi: {n} o meno.',
    missing: 'Questo manca.', number: 'Indichi un numero.', whole: 'Indichi un numero intero.', text: 'Indichi un testo.', yesNo: 'Indichi true o false.', list: 'Indichi un elenco.',
    day: 'Indichi un giorno, per esempio 2026-09-14.', moment: 'Indichi giorno e ora, per esempio 2026-09-14T07:00:00Z.', email: 'Indichi un indirizzo di posta elettronica.', form: 'Non ha la forma attesa ({form}).',
    oneOf: 'Scelga tra: {list}.', extra: 'Qui non c’è un campo con questo nome: {list}.',
  },
  pt: {
    least: 'Indique {n} ou mais.', above: 'Indique mais de {n}.', most: 'Indique {n} ou menos.', below: 'Indique menos de {n}.',
    leastLetters: 'Caracteres pedidos: {n} ou mais.', mostLetters: 'Caracteres permitidos: {n} ou menos.', empty: 'Não pode ficar vazio.',
    leastEntries: 'Elementos pedidos: {n} ou mais.', oneEntry: 'Indique pelo menos um elemento.', mostEntries: 'Elementos permitidos: {n} ou menos.',
    missing: 'Isto falta.', number: 'Indique um número.', whole: 'Indique um número inteiro.', text: 'Indique um texto.', yesNo: 'Indique true ou false.', list: 'Indique uma lista.',
    day: 'Indique um dia, por exemplo 2026-09-14.', moment: 'Indique dia e hora, por exemplo 2026-09-14T07:00:00Z.', email: 'Indique um endereço de correio.', form: 'Não tem a forma esperada ({form}).',
    oneOf: 'Escolha um de: {list}.', extra: 'Aqui não há nenhum campo com este nome: {list}.',
  },
} satisfies Record<Language, Record<string, string>>;

type Key = keyof (typeof sentences)['en'];
type Told = readonly [Key, Readonly<Record<string, string>>?] | null;

/** The plain sentence for an issue of the library; null for the rarer kinds, which the library says itself. */
export function plainInput(language: Language, issue: Issue): string | null {
  const told = tell(issue);
  if (told === null) return null;
  const [key, facts = {}] = told;
  return Object.entries(facts).reduce((text, [name, value]) => text.replace(`{${name}}`, () => value), sentences[language][key]);
}

function tell(issue: Issue): Told {
  switch (issue.code) {
    case 'too_small':
      return bound(issue.origin, Number(issue.minimum), { number: issue.inclusive === false ? 'above' : 'least', letters: issue.minimum === 1 ? 'empty' : 'leastLetters', entries: issue.minimum === 1 ? 'oneEntry' : 'leastEntries' });
    case 'too_big':
      return bound(issue.origin, Number(issue.maximum), { number: issue.inclusive === false ? 'below' : 'most', letters: 'mostLetters', entries: 'mostEntries' });
    case 'invalid_type':
      if (issue.message.endsWith('received undefined')) return ['missing'];
      return kinds[issue.expected] ?? null;
    case 'invalid_format':
      return formats[issue.format] ?? ['form', { form: issue.format }];
    case 'invalid_value':
      return ['oneOf', { list: issue.values.map(String).join(', ') }];
    case 'unrecognized_keys':
      return ['extra', { list: issue.keys.join(', ') }];
    default:
      return null;
  }
}

function bound(origin: string, limit: number, keys: { number: Key; letters: Key; entries: Key }): Told {
  if (origin === 'number' || origin === 'int') return [keys.number, { n: String(limit) }];
  if (origin === 'string') return [keys.letters, { n: String(limit) }];
  return origin === 'array' ? [keys.entries, { n: String(limit) }] : null;
}

const kinds: Partial<Record<string, Told>> = { number: ['number'], int: ['whole'], string: ['text'], boolean: ['yesNo'], array: ['list'] };
const formats: Partial<Record<string, Told>> = { date: ['day'], datetime: ['moment'], email: ['email'] };
