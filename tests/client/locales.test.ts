import { readdirSync, readFileSync, statSync } from 'node:fs';
import { join, relative, resolve } from 'node:path';
import { parse, type SFCTemplateBlock } from 'vue/compiler-sfc';
import { describe, expect, it } from 'vitest';

const root = resolve(import.meta.dirname, '../..');
const languages = ['en', 'es', 'fr', 'it', 'pt'];
type Tree = { [key: string]: string | Tree };

function flat(tree: Tree, prefix: string): [string, string][] {
  return Object.entries(tree).flatMap(([key, value]) => (typeof value === 'string' ? [[`${prefix}.${key}`, value] as [string, string]] : flat(value, `${prefix}.${key}`)));
}

function textsOf(language: string): Map<string, string> {
  const folder = join(root, 'src/locales', language);
  return new Map(readdirSync(folder).flatMap((file) => flat(JSON.parse(readFileSync(join(folder, file), 'utf8')) as Tree, file.replace('.json', ''))));
}

const texts = Object.fromEntries(languages.map((language) => [language, textsOf(language)]));
const english = texts.en!;

function files(folder: string): string[] {
  return readdirSync(folder).flatMap((name) => {
    const path = join(folder, name);
    if (statSync(path).isDirectory()) return name === 'locales' ? [] : files(path);
    return /\.(vue|ts)$/.test(name) ? [path] : [];
  });
}

const sources = files(join(root, 'src')).map((path) => ({ path: relative(root, path), code: readFileSync(path, 'utf8') }));

/** Keys asked for by name, and beginnings of keys that are put together ("frame.role."). */
function keysAsked(code: string): { whole: string[]; beginnings: string[] } {
  const call = /(?<![\w$.])\$?(?:t|te|global\.t)\(\s*(?:'([^']+)'|"([^"]+)"|`([^`$]*)(\$\{)?)/g;
  const strings = /[`'"]([a-z][A-Za-z]*\.[A-Za-z0-9.]*)(\$\{|[`'"])/g;
  const whole: string[] = [];
  const beginnings: string[] = [];
  for (const match of [...code.matchAll(call), ...code.matchAll(/i18n\.global\.t\(\s*'([^']+)'/g)]) {
    const key = match[1] ?? match[2];
    if (key !== undefined) whole.push(key);
    else if (match[4] === undefined) whole.push(match[3]!);
    else beginnings.push(match[3]!);
  }
  for (const match of code.matchAll(strings)) (match[2] === '${' ? beginnings : whole).push(match[1]!);
  return { whole, beginnings };
}

describe('texts', () => {
  it.each(languages.filter((language) => language !== 'en'))('%s has every text of English and no other', (language) => {
    const own = texts[language]!;
    expect([...english.keys()].filter((key) => !own.has(key)), 'missing').toEqual([]);
    expect([...own.keys()].filter((key) => !english.has(key)), 'left over').toEqual([]);
  });

  it.each(languages)('%s names the same values and the same number of forms as English', (language) => {
    const shape = (text: string) => ({ values: [...new Set([...text.matchAll(/\{(\w+)\}/g)].map((match) => match[1]))].sort(), forms: text.split('|').length });
    const different = [...english].filter(([key, text]) => JSON.stringify(shape(text)) !== JSON.stringify(shape(texts[language]!.get(key) ?? text)));
    expect(different.map(([key]) => key)).toEqual([]);
  });

  it.each(languages)('%s has no empty text and no exclamation mark', (language) => {
    expect([...texts[language]!].filter(([, text]) => text.trim() === '' || text.includes('!')).map(([key]) => key)).toEqual([]);
  });

  it('every text that the code asks for exists', () => {
    const asked = sources.flatMap(({ path, code }) => {
      const call = /(?<![\w$.])t\(\s*'([^']+)'/g;
      return [...code.matchAll(call)].map((match) => ({ path, key: match[1]! })).filter(({ key }) => key.includes('.'));
    });
    expect(asked.length).toBeGreaterThan(50);
    expect(asked.filter(({ key }) => !english.has(key)).map(({ path, key }) => `${path}: ${key}`)).toEqual([]);
  });

  it('every text is asked for somewhere', () => {
    const asked = sources.map(({ code }) => keysAsked(code));
    const whole = new Set(asked.flatMap((one) => one.whole));
    const beginnings = [...new Set(asked.flatMap((one) => one.beginnings))].filter((one) => one.includes('.'));
    expect([...english.keys()].filter((key) => !whole.has(key) && !beginnings.some((beginning) => key.startsWith(beginning)))).toEqual([]);
  });
});

describe('deeds in the history', () => {
  /** Deeds that the server writes down, as they stand in its code; `zones.${step}` stands for its three steps. */
  function deeds(folder: string): string[] {
    return readdirSync(folder).flatMap((name) => {
      const path = join(folder, name);
      if (statSync(path).isDirectory()) return deeds(path);
      return path.endsWith('.ts') ? [...readFileSync(path, 'utf8').matchAll(/\baction: '([a-zA-Z]+\.[a-zA-Z]+)'/g)].map((match) => match[1]!) : [];
    });
  }

  it('each have a sentence of their own', () => {
    const written = [...new Set(deeds(join(root, 'server')))];
    expect(written.length).toBeGreaterThan(50);
    expect(written.filter((deed) => !english.has(`people.deed.${deed.replace('.', '_')}`))).toEqual([]);
  });
});

interface TemplateNode {
  type: number;
  content?: string | { content: string };
  tag?: string;
  children?: TemplateNode[];
  branches?: TemplateNode[];
  props?: { type: number; name: string; value?: { content: string } }[];
  loc: { start: { line: number } };
}

const elementType = 1;
const textType = 2;
const attributeType = 6;
const spoken = new Set(['aria-label', 'title', 'placeholder', 'alt', 'label', 'note', 'answer', 'rest', 'above', 'below', 'caption', 'help', 'do-it', 'unit']);
/** Names and units that are the same in every language. */
const proper = /^(Patchrow,?|GeoJSON|KML|GPX|CSV|PDF|GeoTIFF|pH|°Brix|km\/h)$/;
const isWords = (text: string) => /\p{L}{2,}/u.test(text) && !proper.test(text.trim());

function inlineWords(node: TemplateNode): string[] {
  const own = node.type === textType && typeof node.content === 'string' && isWords(node.content) ? [`line ${node.loc.start.line}: ${node.content.trim()}`] : [];
  const attributes = node.type === elementType ? (node.props ?? []).filter((prop) => prop.type === attributeType && spoken.has(prop.name) && isWords(prop.value?.content ?? '')).map((prop) => `line ${node.loc.start.line}: ${prop.name}="${prop.value!.content}"`) : [];
  return [...own, ...attributes, ...(node.children ?? []).flatMap(inlineWords)];
}

describe('templates', () => {
  it('hold no words of their own: every sentence is in the language files', () => {
    const found = sources.filter(({ path }) => path.endsWith('.vue')).flatMap(({ path, code }) => {
      const template: SFCTemplateBlock | null = parse(code).descriptor.template;
      return template?.ast ? inlineWords(template.ast as unknown as TemplateNode).map((words) => `${path}, ${words}`) : [];
    });
    expect(found).toEqual([]);
  });

  it('finds a word that was left in a template', () => {
    const template = parse('<template><p title="Help">Hello <b>{{ t("x.y") }}</b></p></template>').descriptor.template!;
    expect(inlineWords(template.ast as unknown as TemplateNode)).toHaveLength(2);
  });
});
