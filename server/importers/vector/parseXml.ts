import { DOMParser } from '@xmldom/xmldom';
import { ImportProblem } from '../importProblem.ts';
import { limits } from '../limits.ts';

/**
 * XML without document type: entities of a file's own are how small texts become huge or fetch other files, and neither
 * KML nor GPX needs them. Throws ImportProblem.
 */
export function parseXml(text: string, rootName: string): Document {
  if (/<!(DOCTYPE|ENTITY)/i.test(text)) throw new ImportProblem({ code: 'damaged', fact: 'It declares entities of its own, which are not read for safety.', remedy: 'Export the file again from the program that made it.' });
  checkDepth(text);
  const parsed = parse(text);
  const found = parsed.documentElement?.localName ?? 'nothing';
  if (found.toLowerCase() !== rootName)
    throw new ImportProblem({
      code: 'wrong-type',
      fact: `It is XML, but begins with <${found.slice(0, 40)}> instead of <${rootName}>.`,
      remedy: `Export the outlines as ${rootName.toUpperCase()}.`,
      params: { found: found.slice(0, 40) },
    });
  return parsed;
}

function parse(text: string): Document {
  const fail = (detail: string): never => {
    throw new ImportProblem({
      code: 'damaged',
      fact: `It is not valid XML (${detail.split('\n')[0]!.slice(0, 120)}).`,
      remedy: 'Export the file again; it was probably cut off or edited by hand.',
      params: { why: 'not-whole-text', detail: detail.slice(0, 120) },
    });
  };
  const parser = new DOMParser({ onError: (level, message) => (level === 'warning' ? undefined : fail(String(message))) });
  try {
    // The library's document has what is needed of the browser's.
    return parser.parseFromString(text.replace(/^\uFEFF/, ''), 'text/xml') as unknown as Document;
  } catch (error) {
    if (error instanceof ImportProblem) throw error;
    return fail(error instanceof Error ? error.message : 'unknown error');
  }
}

function checkDepth(text: string): void {
  let depth = 0;
  for (const match of text.matchAll(/<(\/?)[A-Za-z_][^<>]*?(\/?)>/g)) {
    if (match[1] === '/') depth--;
    else if (match[2] !== '/' && ++depth > limits.xmlDepth) throw new ImportProblem({ code: 'damaged', fact: `Its elements are nested more than ${limits.xmlDepth} deep.`, remedy: 'Export the file again from the program that made it.' });
  }
}
