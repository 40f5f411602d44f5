import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { Clash, problemOf } from '../../server/errors.ts';
import { en } from '../../server/sentences/en.ts';
import { es } from '../../server/sentences/es.ts';
import { fr } from '../../server/sentences/fr.ts';
import { computationWords, failureWords } from '../../server/sentences/computationWords.ts';
import * as computationsEs from '../../server/sentences/computations/es.ts';
import * as computationsFr from '../../server/sentences/computations/fr.ts';
import * as computationsIt from '../../server/sentences/computations/it.ts';
import * as computationsPt from '../../server/sentences/computations/pt.ts';
import * as inputsEs from '../../server/sentences/inputs/es.ts';
import * as inputsFr from '../../server/sentences/inputs/fr.ts';
import * as inputsIt from '../../server/sentences/inputs/it.ts';
import * as inputsPt from '../../server/sentences/inputs/pt.ts';
import { it as italian } from '../../server/sentences/it.ts';
import { pt } from '../../server/sentences/pt.ts';
import { say, sentenceIn } from '../../server/sentences/say.ts';
import { AnalysisError } from '../../shared/analysis/analysisError.ts';

const others = { es, fr, it: italian, pt } as const;
const inputs = { es: inputsEs.es, fr: inputsFr.fr, it: inputsIt.it, pt: inputsPt.pt } as const;
const computations = { es: computationsEs.es, fr: computationsFr.fr, it: computationsIt.it, pt: computationsPt.pt } as const;
const placesIn = (text: string) => [...new Set(text.match(/\{\w+\}/g))].sort();

/** A template of the source with its facts numbered, as the catalogues have it. */
function numbered(template: string): string {
  let fact = 0;
  return template.replace(/\$\{(?:[^{}]|\{[^{}]*\})*\}/g, () => `{${++fact}}`);
}

function sources(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true, recursive: true })
    .filter((entry) => entry.isFile() && entry.name.endsWith('.ts'))
    .map((entry) => readFileSync(join(entry.parentPath, entry.name), 'utf8'));
}

describe('refusals in the language of whoever asked', () => {
  it.each(Object.entries(others))('%s has every sentence, with its places and forms', (_language, catalog) => {
    expect(Object.keys(catalog)).toEqual(Object.keys(en));
    for (const [key, text] of Object.entries(en)) {
      const told = catalog[key as keyof typeof en];
      expect(placesIn(told), key).toEqual(placesIn(text));
      expect(told.split(' | ').length, key).toBe(text.split(' | ').length);
      expect(told, key).not.toBe(text);
    }
  });

  it('uses every sentence, and refuses with nothing that is English only', () => {
    const code = sources('server').join('\n');
    expect(Object.keys(en).filter((key) => !new RegExp(`['"]${key}['"]`).test(code))).toEqual([]);
    expect(code.match(/new (?:Unusable|Clash|Stale|TooMuch)\('\w+', ['"`]|new (?:Missing|NotAllowed|NotSignedIn)\(['"`]/g) ?? []).toEqual([]);
  });

  it.each(Object.entries(inputs))('%s has every sentence of the contracts about wrong input', (_language, catalog) => {
    const sentences = sources('shared/contracts').flatMap((text) => [...text.matchAll(/'([A-Z][^'\n]{8,}\.)'/g)].map(([, sentence]) => sentence!));
    expect(sentences.length).toBeGreaterThan(40);
    expect(sentences.filter((sentence) => !catalog[sentence])).toEqual([]);
  });

  it('writes numbers of things, names and times as each language does', () => {
    expect(sentenceIn('en', say('roundsOut', { n: 1 }))).toBe('A round walks these vines. Close it or call it off before drawing again.');
    expect(sentenceIn('en', say('roundsOut', { n: 3 }))).toMatch(/^3 rounds walk/);
    const until = { moment: new Date('2026-08-20T13:00:00Z'), timeZone: 'Europe/Lisbon' };
    const stop = say('entryRestricted', { block: 'Heron Bank', until, product: 'Wettable sulphur', lifters: { oneOf: ['Tessa Brand', 'Hester Vane'] } });
    expect(sentenceIn('en', stop)).toMatch(/until Thu, 20 Aug 2026, 14:00 .*Tessa Brand or Hester Vane/);
    expect(sentenceIn('fr', stop)).toMatch(/jeu\. 20 août 2026.*14:00.*Tessa Brand ou Hester Vane/);
  });

  it('says wrong input in the words of the contract, or in plain ones where the contract has none', () => {
    const contract = z.object({ name: z.string().min(1, 'Give a name.'), areaHa: z.number().max(1000) });
    const { error } = contract.safeParse({ name: '', areaHa: 2000 });
    expect(problemOf(error, 'en').errors).toEqual([
      { path: 'name', message: 'Give a name.' },
      { path: 'areaHa', message: 'Give 1000 or less.' },
    ]);
    const [name, area] = problemOf(error, 'es').errors!;
    expect(name!.message).toBe(inputsEs.es['Give a name.']);
    expect(area!.message).toBe('Indique 1000 o menos.');
  });

  it.each([
    [z.number().positive(), 0, 'Give more than 0.', 'Indiquez plus de 0.'],
    [z.number().min(-3), -4, 'Give -3 or more.', 'Indiquez -3 ou plus.'],
    [z.number().lt(1), 1, 'Give less than 1.', 'Indiquez moins de 1.'],
    [z.number(), 'four', 'Give a number.', 'Indiquez un nombre.'],
    [z.number(), undefined, 'This is missing.', 'Ceci manque.'],
    [z.number().int(), 1.5, 'Give a whole number.', 'Indiquez un nombre entier.'],
    [z.string().min(1), '', 'This must not be empty.', 'Ceci ne peut pas rester vide.'],
    [z.string().max(3), 'four', 'Characters allowed: 3 or fewer.', 'Caractères permis : 3 ou moins.'],
    [z.string(), 7, 'Give a text.', 'Indiquez un texte.'],
    [z.boolean(), 'yes', 'Give true or false.', 'Indiquez true ou false.'],
    [z.array(z.string()).min(1), [], 'Give at least one entry.', 'Indiquez au moins un élément.'],
    [z.array(z.string()).max(1), ['a', 'b'], 'Entries allowed: 1 or fewer.', 'Éléments permis : 1 ou moins.'],
    [z.iso.date(), 'tomorrow', 'Give a day such as 2026-09-14.', 'Indiquez un jour, par exemple 2026-09-14.'],
    [z.email(), 'a@', 'Give an e-mail address.', 'Indiquez une adresse électronique.'],
    [z.uuid(), 'a', 'This has not the form that is expected (uuid).', 'Ceci n’a pas la forme attendue (uuid).'],
    [z.enum(['bare', 'mown']), 'wet', 'Choose one of: bare, mown.', 'Choisissez parmi : bare, mown.'],
    [z.strictObject({}), { extra: 1 }, 'There is no field of this name here: extra.', 'Il n’y a pas ici de champ de ce nom : extra.'],
  ] as const)('a wrong value is answered by what is wanted: %#', (contract, value, english, french) => {
    const { error } = (contract as z.ZodType).safeParse(value);
    expect(problemOf(error, 'en').errors![0]!.message).toBe(english);
    expect(problemOf(error, 'fr').errors![0]!.message).toBe(french);
  });

  it.each(Object.entries(computations))('%s has every sentence of zoning and of the ground about what cannot be computed', (_language, catalog) => {
    const thrown = ['shared/analysis', 'shared/geo'].flatMap(sources).flatMap((text) => [...text.matchAll(/new AnalysisError\(\s*'[\w-]+',\s*(?:'([^']*)'|`([^`]*)`)/g)].map(([, plain, filled]) => numbered(plain ?? filled!)));
    expect(thrown.length).toBeGreaterThan(50);
    expect(thrown.filter((sentence) => !catalog[sentence])).toEqual([]);
    for (const [english, told] of Object.entries(catalog)) {
      expect(placesIn(told), english).toEqual(placesIn(english));
      expect(told, english).not.toBe(english);
    }
  });

  it('finds what a computation said, with its facts and the words among them', () => {
    const error = new AnalysisError('layer-coverage', 'Layer "Vigueur {1} (été) $&" covers 41 % of the block; 60 % is needed. Leave it out or import one that covers the block.');
    expect(problemOf(error, 'en').detail).toBe(error.message);
    expect(problemOf(error, 'fr').detail).toBe('La couche « Vigueur {1} (été) $& » couvre 41 % de la parcelle ; il faut 60 %. Laissez-la de côté ou importez-en une qui couvre la parcelle.');
    expect(computationWords('es', 'Row spacing is -1 m; type a length above 0.')).toBe('Distancia entre hileras: -1 m; escriba una longitud mayor que 0.');
    expect(computationWords('pt', 'Something nobody has written down.')).toBe('Something nobody has written down.');
  });

  it('has what a planner can bring about: spreads that leave nothing, measures out of use, walks that cannot be laid', () => {
    const said = [
      'There is no measure "clusterCount" in use in this estate. Choose another or add it.',
      'The spread between clusters of a vine (2.5) leaves nothing between vines (1.05 in all). Enter a smaller one, or say that more clusters were taken then.',
      'Vines of the walk: 1; people: 3; send at most 1.',
      'Some targets cannot be reached from the start without crossing a row; open a headland or list a gap.',
    ];
    for (const sentence of said) for (const language of ['fr', 'es', 'it', 'pt'] as const) expect(computationWords(language, sentence), language).not.toBe(sentence);
    expect(computationWords('fr', said[1]!)).toContain('(2.5)');
  });

  it('says again why a job failed, which is kept in English', () => {
    const kept = sentenceIn('en', say('outlineChangedSinceAsked', { block: 'Heron Bank' }));
    expect(failureWords('it', kept)).toBe(sentenceIn('it', say('outlineChangedSinceAsked', { block: 'Heron Bank' })));
    expect(failureWords('fr', sentenceIn('en', say('roundsOut', { n: 3 })))).toBe(sentenceIn('fr', say('roundsOut', { n: 3 })));
    expect(failureWords('en', kept)).toBe(kept);
  });

  it('keeps English for the log', () => {
    const error = new Clash('roundsOut', say('roundsOut', { n: 2 }));
    expect(error.message).toMatch(/^2 rounds walk/);
    expect(problemOf(error, 'pt').detail).not.toBe(error.message);
  });
});
