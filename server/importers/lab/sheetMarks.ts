import { unzipSync } from 'fflate';
import type { RawSheet } from '../../../shared/lab/file/labFile.ts';

type Marks = Required<Pick<RawSheet, 'hidden' | 'emptyFormulas'>>;

/**
 * What the reader of workbooks does not tell: hidden rows and columns, and formulas stored without their result (Office Open
 * XML, ECMA-376 part 1, 18.3.1: `row`, `col`, `f`). By the name of the sheet. The archive has been judged before.
 */
export function sheetMarks(bytes: Uint8Array): Map<string, Marks> {
  const files = unzipSync(bytes, { filter: ({ name }) => /^xl\/(workbook\.xml|_rels\/workbook\.xml\.rels|worksheets\/[^/]+\.xml)$/u.test(name) });
  const text = (name: string): string => (files[name] ? new TextDecoder().decode(files[name]) : '');
  const targets = new Map([...text('xl/_rels/workbook.xml.rels').matchAll(/<Relationship\b[^>]*>/gu)].map(([tag]) => [attribute(tag, 'Id'), attribute(tag, 'Target').replace(/^\/?(xl\/)?/u, 'xl/')]));
  return new Map([...text('xl/workbook.xml').matchAll(/<(?:\w+:)?sheet\b[^>]*>/gu)].map(([tag]) => [plain(attribute(tag, 'name')), marksOf(text(targets.get(attribute(tag, '\\w+:id')) ?? ''))]));
}

function marksOf(sheet: string): Marks {
  const isHidden = ([tag]: RegExpMatchArray): boolean => /^(1|true)$/u.test(attribute(tag!, 'hidden'));
  const rows = [...sheet.matchAll(/<(?:\w+:)?row\b[^>]*>/gu)].filter(isHidden).map(([tag]) => Number(attribute(tag, 'r')) - 1);
  const columns = [...sheet.matchAll(/<(?:\w+:)?col\b[^>]*>/gu)].filter(isHidden).flatMap(([tag]) => {
    const [from, to] = [Number(attribute(tag, 'min')), Math.min(Number(attribute(tag, 'max')), mostColumns)];
    return Array.from({ length: Math.max(0, to - from + 1) }, (_, at) => from - 1 + at);
  });
  const cells = sheet.matchAll(/<((?:\w+:)?)c\b[^>]*?(?:\/>|>([\s\S]*?)<\/\1c>)/gu);
  const emptyFormulas = [...cells].filter(([, , inside = '']) => /<(?:\w+:)?f\b/u.test(inside) && !/<(?:\w+:)?v>[^<]/u.test(inside)).length;
  return { hidden: { rows: rows.filter((row) => row >= 0), columns }, emptyFormulas };
}

/** Whoever hides "all columns to the right" writes 16 384 of them. */
const mostColumns = 500;

function attribute(tag: string, name: string): string {
  return new RegExp(`\\s${name}="([^"]*)"`, 'u').exec(tag)?.[1] ?? '';
}

const plain = (text: string): string => text.replace(/&(lt|gt|quot|apos|amp);/gu, (_, name: 'lt' | 'gt' | 'quot' | 'apos' | 'amp') => ({ lt: '<', gt: '>', quot: '"', apos: "'", amp: '&' })[name]);
