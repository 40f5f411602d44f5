import { readdirSync, readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { sheetTexts } from '../../server/exporters/sheetTexts.ts';
import { seasonLetterTexts } from '../../server/exporters/report/seasonLetterTexts.ts';
import { it as report } from '../../server/exporters/report/texts/it.ts';
import { mailTexts } from '../../server/mail/texts.ts';
import { it as computations } from '../../server/sentences/computations/it.ts';
import { it as inputs } from '../../server/sentences/inputs/it.ts';
import { it as refusals } from '../../server/sentences/it.ts';

type Tree = { readonly [key: string]: string | readonly string[] | Tree };

const folder = resolve(import.meta.dirname, '../../src/locales/it');
const screens = Object.fromEntries(readdirSync(folder).map((file) => [file, JSON.parse(readFileSync(join(folder, file), 'utf8')) as Tree]));

function texts(tree: Tree | readonly string[] | string): string[] {
  return typeof tree === 'string' ? [tree] : Object.values(tree).flatMap((part) => texts(part as Tree | string));
}

/** Words that only fit "voi" or "tu": commands where a sentence begins, and what belongs to somebody so addressed. */
const otherAddress = /(?:^|[.;:|] )(?:Scegliete|Indicate|Controllate|Mandate|Esportate(?:lo|la)?|Guardate|Scrivete|Disegnate|Portate|Premete|Aggiungete|Correggete(?:la|le)?)\b|\b(?:voi|vostr[oaie]|potete|avete|siete)\b|\b(?:tu|tuo|tua|tuoi|tue|puoi)\b|^(?:Salva|Chiudi|Annulla|Scegli|Mostra|Aggiungi|Invia|Togli|Crea|Modifica|Apri)\b/iu;
/** A layer of data is "strato"; "livello" is left to levels, of which no text speaks. */
const otherLayer = /\blivell[oi]\b/iu;

describe('Italian texts', () => {
  const all = [screens as Tree, refusals, computations, inputs, report as unknown as Tree, mailTexts.it, sheetTexts.it as unknown as Tree, seasonLetterTexts.it as unknown as Tree].flatMap(texts);

  it('address whoever reads in one way, the courteous', () => {
    expect(all.length).toBeGreaterThan(2000);
    expect(all.filter((text) => otherAddress.test(text))).toEqual([]);
  });

  it('have one word for a layer', () => {
    expect(all.filter((text) => otherLayer.test(text))).toEqual([]);
  });

  it.each(['Troppo grande. Mandate un file più piccolo.', 'Le vostre zone', 'Il tuo ruolo', 'Salva il nome'])('finds another address: %s', (text) => {
    expect(text).toMatch(otherAddress);
  });

  it.each(['Le mandi una alla volta.', 'le lettere controllate', 'Salvare il nome', 'Lasciate fuori'])('takes no other word for one: %s', (text) => {
    expect(text).not.toMatch(otherAddress);
  });
});
