import { readdirSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';

const root = resolve(import.meta.dirname, '../..');
const worlds = ['shared', 'server', 'src', 'migrations'];

interface Import {
  file: string;
  target: string;
  typeOnly: boolean;
}

function sources(folder: string): string[] {
  return readdirSync(join(root, folder)).flatMap((name) => {
    const path = join(folder, name);
    if (statSync(join(root, path)).isDirectory()) return sources(path);
    return /\.(ts|vue)$/.test(name) ? [path] : [];
  });
}

const files = worlds.flatMap(sources);
const imports = files.flatMap(importsOf);

function importsOf(file: string): Import[] {
  const text = readFileSync(join(root, file), 'utf8');
  const statement = /^\s*(?:import|export)\s+(type\s+)?(?:[^'";]*?\sfrom\s+)?['"]([^'"]+)['"]/gm;
  const dynamic = /import\(\s*['"]([^'"]+)['"]\s*\)/g;
  return [
    ...[...text.matchAll(statement)].map((match) => ({ file, target: targetOf(file, match[2]!), typeOnly: match[1] !== undefined })),
    ...[...text.matchAll(dynamic)].map((match) => ({ file, target: targetOf(file, match[1]!), typeOnly: false })),
  ];
}

function targetOf(file: string, specifier: string): string {
  if (specifier.startsWith('@/')) return `src/${specifier.slice(2)}`;
  return specifier.startsWith('.') ? relative(root, resolve(root, dirname(file), specifier)) : specifier;
}

interface Wall {
  rule: string;
  from: RegExp;
  never: RegExp;
  except?: RegExp;
  typesPass?: boolean;
}

const walls: Wall[] = [
  { rule: 'the browser never imports the server', from: /^src\//, never: /^(server|migrations)\// },
  { rule: 'the server never imports the browser', from: /^server\//, never: /^src\// },
  { rule: 'shared imports neither world', from: /^shared\//, never: /^(server|src|migrations)\// },
  { rule: 'shared is pure: no framework, no database, no node module', from: /^shared\//, never: /^(express|objection|knex|pg|vue|pinia|maplibre-gl|node:.*|fs|path)$/ },
  { rule: 'only the map parts import maplibre-gl', from: /^src\//, never: /^(maplibre-gl|terra-draw)/, except: /^src\/(components\/map\/|composables\/useMap)/ },
  { rule: 'components never import stores', from: /^src\/components\//, never: /^src\/stores\//, typesPass: true },
  { rule: 'stores import no stores, components, views or router', from: /^src\/stores\//, never: /^src\/(stores|components|views|router|composables)\//, typesPass: true },
  { rule: 'lib imports none of the levels above it', from: /^src\/lib\//, never: /^src\/(stores|components|views|router|composables)\//, typesPass: true },
  { rule: 'routes call services, nothing deeper', from: /^server\/routes\//, never: /^(knex|objection|server\/(models|workers|importers|exporters)\/|shared\/analysis\/)/, typesPass: true },
  { rule: 'services never import services, routes or express', from: /^server\/services\//, never: /^(express|server\/(services|routes)\/)/, except: /^server\/services\/[^/]+\//, typesPass: true },
  { rule: 'models import no services, routes or analysis', from: /^server\/models\//, never: /^(server\/(services|routes)|shared\/analysis)\//, typesPass: true },
  { rule: 'importers and exporters never import models', from: /^server\/(importers|exporters)\//, never: /^server\/models\//, typesPass: true },
  { rule: 'worker threads are opened in server/workers only', from: /^server\//, never: /^(node:worker_threads|piscina)$/, except: /^server\/workers\//, typesPass: true },
];

describe('walls', () => {
  it.each(walls)('$rule', ({ from, never, except, typesPass }) => {
    const broken = imports.filter(({ file, target, typeOnly }) => from.test(file) && never.test(target) && !(except?.test(file) ?? false) && !(typesPass === true && typeOnly));
    expect(broken.map(({ file, target }) => `${file} imports ${target}`)).toEqual([]);
  });

  it('no import cycle, types excepted', () => {
    const graph = new Map<string, string[]>();
    for (const { file, target, typeOnly } of imports) if (!typeOnly && files.includes(target)) graph.set(file, [...(graph.get(file) ?? []), target]);
    expect(cyclesOf(graph)).toEqual([]);
  });

  it('only server/config.ts reads the environment', () => {
    const readers = files.filter((file) => file.startsWith('server/') && /process\.env/.test(readFileSync(join(root, file), 'utf8')));
    expect(readers.filter((file) => file !== 'server/config.ts')).toEqual([]);
  });

  it('only src/lib/http.ts calls fetch or XMLHttpRequest', () => {
    const callers = files.filter((file) => file.startsWith('src/') && /\b(fetch\(|new XMLHttpRequest|new EventSource)/.test(readFileSync(join(root, file), 'utf8')));
    expect(callers.filter((file) => !/^src\/lib\/(http|jobEvents)\.ts$/.test(file))).toEqual([]);
  });

  it('shared uses no clock and no unseeded randomness', () => {
    const impure = files.filter((file) => file.startsWith('shared/') && /\b(Math\.random\(|Date\.now\(|new Date\(\)|performance\.now\()/.test(code(file)));
    expect(impure).toEqual([]);
  });

  it('no file is named after nothing in particular', () => {
    expect(files.filter((file) => /(^|\/)(utils?|helpers?|misc|index)\.(ts|vue)$/.test(file) && file !== 'src/router/index.ts')).toEqual([]);
  });
});

/** Source without comments, so that a sentence about a rule does not break it. */
function code(file: string): string {
  return readFileSync(join(root, file), 'utf8').replace(/\/\*[\s\S]*?\*\/|\/\/.*$/gm, '');
}

function cyclesOf(graph: Map<string, string[]>): string[] {
  const state = new Map<string, 'open' | 'done'>();
  const cycles: string[] = [];
  const visit = (file: string, path: string[]): void => {
    if (state.get(file) === 'done') return;
    if (state.get(file) === 'open') {
      cycles.push([...path.slice(path.indexOf(file)), file].join(' -> '));
      return;
    }
    state.set(file, 'open');
    for (const next of graph.get(file) ?? []) visit(next, [...path, file]);
    state.set(file, 'done');
  };
  for (const file of graph.keys()) visit(file, []);
  return cycles;
}
