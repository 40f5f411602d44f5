import { labelCode, spellLabelCode } from '../../../shared/field/labelCode.ts';
import { writeXlsx } from './writeXlsx.ts';

/** Labels of the bags that the estate knows, by number. */
export const labels = [11, 222, 3333, 44_444, 555_555, 666_666].map(labelCode);
const [A, B, C, D, E, F] = labels as [string, string, string, string, string, string];

export interface UglyFile {
  readonly name: string;
  readonly bytes: Uint8Array<ArrayBuffer>;
  /** Questions that must be asked, by key, with the answers that settle them; none means that it is clear. */
  readonly asked?: Readonly<Record<string, string>>;
  /** Results as "label measure value", in the estate's units, `<` for below detection. */
  readonly read: readonly string[];
  /** Sentences that must be said. */
  readonly said?: readonly string[];
}

const utf8 = (text: string) => new Uint8Array(Buffer.from(text, 'utf8'));
const latin1 = (text: string) => new Uint8Array(Buffer.from(text, 'latin1'));
const utf16 = (text: string) => new Uint8Array(Buffer.from(`\uFEFF${text}`, 'utf16le'));
const r = (label: string, measure: string, value: number | string) => `${label} ${measure} ${value}`;

/** Files as laboratories and their spreadsheets really make them: what must be read, and what must be asked first. */
export const uglyFiles: readonly UglyFile[] = [
  { name: 'semicolons and decimal commas', bytes: utf8(`Code;Brix;pH;TA (g/L tartaric)\n${A};23,4;3,41;6,2\n${B};22,1;3,38;6,9\n`), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(A, 'ta', 6.2), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(B, 'ta', 6.9)], said: ['read'] },
  { name: 'tabs, Windows accents, lines before the table', bytes: latin1(`Laboratoire du coteau\nReçu le\t03/09/2026\n\nÉchantillon\tDegré Brix\tAcidité totale (g/L H2SO4)\n${spellLabelCode(A)}\t23,4\t4,5\n${B.toLowerCase()}\t22,0\t4,0\n`), read: [r(A, 'brix', 23.4), r(A, 'ta', 6.89), r(B, 'brix', 22), r(B, 'ta', 6.12)], said: ['encoding', 'linesBefore', 'readConverted'] },
  { name: 'UTF-16 as spreadsheets save Unicode text', bytes: utf16(`Muestra\tBaumé\tpH\r\n${A}\t13.0\t3.5\r\n${B}\t12.0\t3.4\r\n`), read: [r(A, 'brix', 23.47), r(A, 'ph', 3.5), r(B, 'brix', 21.64), r(B, 'ph', 3.4)] },
  { name: 'a scale of acidity that nobody told', bytes: utf8(`Sample,Brix,TA\n${A},23.4,4.5\n${B},22.0,4.0\n`), asked: { 'unit:TA': 'sulphuricGPerL' }, read: [r(A, 'brix', 23.4), r(A, 'ta', 6.89), r(B, 'brix', 22), r(B, 'ta', 6.12)] },
  { name: 'acidity in milliequivalents', bytes: utf8(`Sample,Total acidity meq/L\n${A},80\n${B},90\n`), read: [r(A, 'ta', 6), r(B, 'ta', 6.75)] },
  { name: 'degrees Oechsle, a row of units', bytes: utf8(`Probe;Mostgewicht;pH-Wert\n;°Oe;\n${A};90;3,3\n${B};110;3,2\n`), read: [r(A, 'brix', 21.59), r(A, 'ph', 3.3), r(B, 'brix', 25.97), r(B, 'ph', 3.2)] },
  { name: 'sugar without a unit that can only be a gravity', bytes: utf8(`ID;Zuccheri;pH\n${A};1,090;3,31\n${B};1,100;3,29\n`), read: [r(A, 'brix', 21.59), r(A, 'ph', 3.31), r(B, 'brix', 23.8), r(B, 'ph', 3.29)], said: ['unitByFigures'] },
  { name: 'sugar that could be degrees Brix or Baumé', bytes: utf8(`ID;Azúcares\n${A};12,5\n${B};13,5\n`), asked: { 'unit:Azúcares': 'baume' }, read: [r(A, 'brix', 22.56), r(B, 'brix', 24.38)] },
  { name: 'sugar in grams a litre', bytes: utf8(`ID;Sucres (g/L)\n${A};240\n${B};263,75\n`), asked: { 'unit:Sucres (g/L)': 'solidsGPerL' }, read: [r(A, 'brix', 22.02), r(B, 'brix', 24)] },
  { name: 'sugar in grams a litre as the reference table has it', bytes: utf8(`ID;Sucres (g/L)\n${A};240\n${B};209,0\n`), asked: { 'unit:Sucres (g/L)': 'sugarGPerL' }, read: [r(A, 'brix', 24.19), r(B, 'brix', 21.5)] },
  { name: 'a comma that is decimals or thousands', bytes: utf8(`ID;YAN mg/L\n${A};1,150\n${B};1,220\n`), asked: { decimal: 'point', [`cell:2:YAN mg/L`]: 'leaveOut', [`cell:3:YAN mg/L`]: 'leaveOut' }, read: [] },
  { name: 'thousands beside decimals', bytes: utf8(`ID;Berry weight 100 berries (g);YAN (mg/L)\n${A};145,2;1.050,0\n${B};132,8;180,5\n`), asked: { 'cell:2:YAN (mg/L)': 'leaveOut' }, read: [r(A, 'berryWeight', 1.45), r(B, 'berryWeight', 1.33), r(B, 'yan', 180.5)] },
  { name: 'decimal commas that divided the cells', bytes: utf8(`Code,Brix,pH\n${A},23,4,3,41\n${B},22,1,3,38\n`), asked: { joined: 'join' }, read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38)] },
  { name: 'titles and figures one column apart', bytes: utf8(`Code;Brix;pH;TA tartaric\n${A};;23.4;3.41;6.2\n${B};;22.1;3.38;6.9\n`), asked: { shift: 'next' }, read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(A, 'ta', 6.2), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(B, 'ta', 6.9)] },
  { name: 'one row that starts a cell late', bytes: utf8(`Code;Brix;pH\n${A};23.4;3.41\n;${B};22.1;3.38\n${C};21.0;3.30\n${D};20.5;3.28\n`), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(C, 'brix', 21), r(C, 'ph', 3.3), r(D, 'brix', 20.5), r(D, 'ph', 3.28)], said: ['rowMoved'] },
  { name: 'a row with a cell missing before its figures', bytes: utf8(`Code;Brix;pH\n${A};23.4;3.41\n${B};3.38;\n${C};21.0;3.30\n`), asked: { 'cell:3:Brix': 'leaveOut' }, read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(C, 'brix', 21), r(C, 'ph', 3.3)] },
  { name: 'pH without its mark', bytes: utf8(`Code;Brix;pH\n${A};23.4;341\n${B};22.1;338\n`), asked: { 'scale:pH': 'divide' }, read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38)] },
  { name: 'a workbook with a formula, a mean below and another sheet', bytes: writeXlsx({ Info: [['Client', 'Estate']], Results: [['Sample', 'Brix', 'pH'], [A, 23.4, { formula: 'AVERAGE(3.40,3.42)', value: 3.41 }], [B, 22.1, 3.38], ['Mean', 22.75, 3.395]] }), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38)], said: ['otherSheets', 'notASample'] },
  { name: 'codes that a spreadsheet changed into a date, an exponent and a number', bytes: writeXlsx({ R: [['Code', 'Brix'], [A, 23.4], [{ day: '2026-09-03' }, 22.1], ['1.00E+05', 21.7], [42, 20.3]] }), asked: { 'row:3:2026-09-03': B, 'row:4:1.00E+05': C, 'row:5:42': 'leaveOut' }, read: [r(A, 'brix', 23.4), r(B, 'brix', 22.1), r(C, 'brix', 21.7)] },
  { name: 'a figure that a spreadsheet changed into a date', bytes: writeXlsx({ R: [['Code', 'Brix', 'pH'], [A, 23.4, 3.4], [B, { day: '2026-04-23' }, 3.3]] }), asked: { 'cell:3:Brix': 'leaveOut' }, read: [r(A, 'brix', 23.4), r(A, 'ph', 3.4), r(B, 'ph', 3.3)] },
  { name: 'a label with one wrong letter', bytes: utf8(`Code;Brix\n${A};23.4\n${B.slice(0, 3)}${B[3] === 'X' ? 'Z' : 'X'}${B.slice(4)};22.1\n`), asked: { [`row:3:${B.slice(0, 3)}${B[3] === 'X' ? 'Z' : 'X'}${B.slice(4)}`]: B }, read: [r(A, 'brix', 23.4), r(B, 'brix', 22.1)] },
  { name: 'below detection, words instead of figures, units in cells', bytes: utf8(`Label|Malic acid (g/L)|Brix\n${A}|<0,1|23,4 °Bx\n${B}|n.d.|22,1 °Bx\n${C}|1,8*|21,0 °Bx\n`), read: [r(A, 'malic', '<0.1'), r(A, 'brix', 23.4), r(B, 'brix', 22.1), r(C, 'malic', 1.8), r(C, 'brix', 21)], said: ['noResult', 'readBelow'] },
  { name: 'one result a line, in a file that names its divider', bytes: utf8(`sep=;\nSample;Parameter;Result;Unit\n${A};Brix;23,4;°Bx\n${A};pH;3,41;\n${A};Total acidity;4,5;g/L H2SO4\n${B};Brix;22,1;°Bx\n`), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(A, 'ta', 6.89), r(B, 'brix', 22.1)], said: ['oneALine'] },
  { name: 'samples side by side', bytes: utf8(`Sample;${A};${B};${C}\nBrix;23,4;22,1;21,0\npH;3,41;3,38;3,30\n`), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(C, 'brix', 21), r(C, 'ph', 3.3)], said: ['turned'] },
  { name: 'dates in either order', bytes: utf8(`Date;Code;Brix\n03/09/2026;${E};23,4\n04/09/2026;${F};22,1\n`), asked: { dateOrder: 'dmy' }, read: [r(E, 'brix', 23.4), r(F, 'brix', 22.1)] },
  { name: 'dates that only one order lets be after the picking', bytes: utf8(`Date;Code;Brix\n03/09/2026;${A};23,4\n04/09/2026;${B};22,1\n`), read: [r(A, 'brix', 23.4), r(B, 'brix', 22.1)], said: ['dateOrderByBags'] },
  { name: 'the same bag on two lines', bytes: utf8(`Code;Brix\n${A};23.4\n${B};22.1\n${A};23.8\n`), asked: { repeats: 'repeats' }, read: [r(A, 'brix', 23.4), r(B, 'brix', 22.1), r(A, 'brix', 23.8)] },
  { name: 'a refractometer with temperatures', bytes: utf8(`Code;Brix;Temp °C\n${A};23.4;24\n${B};22.0;20\n`), asked: { compensates: 'no' }, read: [r(A, 'brix', 23.7), r(B, 'brix', 22)], said: ['corrected'] },
  { name: 'no titles at all', bytes: utf8(`${A};23,4;3,41\n${B};22,1;3,38\n`), asked: { 'column:#2': 'brix', 'unit:#2': 'brix', 'column:#3': 'ph' }, read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38)], said: ['noHeader'] },
  { name: 'two sheets with results', bytes: writeXlsx({ Monday: [['Code', 'Brix'], [A, 23.4]], Tuesday: [['Code', 'Brix'], [A, 23.9]] }), asked: { sheet: 'Tuesday' }, read: [r(A, 'brix', 23.9)] },
  { name: 'columns that are not wanted', bytes: utf8(`Code;Potential alcohol % vol;Volatile acidity g/L;Brix;Comment\n${A};13,9;0,1;23,4;wet\n${B};13,1;0,1;22,1;\n`), read: [r(A, 'brix', 23.4), r(B, 'brix', 22.1)], said: ['leftOutColumn'] },
  { name: 'temperatures in degrees Fahrenheit, and one that is missing', bytes: utf8(`Code;Brix;Temp °F\n${A};23.4;75.2\n${B};22.0;68\n${C};21.0;\n`), asked: { compensates: 'no', 'cell:4:Brix': 'leaveOut' }, read: [r(A, 'brix', 23.7), r(B, 'brix', 22)], said: ['corrected'] },
  { name: 'acidity in grams for a hundred millilitres', bytes: utf8(`Code;TA g/100 mL tartaric;Brix\n${A};0.62;23.4\n${B};0.69;22.1\n`), read: [r(A, 'ta', 6.2), r(A, 'brix', 23.4), r(B, 'ta', 6.9), r(B, 'brix', 22.1)], said: ['readConverted'] },
  { name: 'acidity in per cent of nobody knows what', bytes: utf8(`Code;TA (%)\n${A};0.62\n${B};0.69\n`), asked: { 'unit:TA (%)': 'tartaricGPer100mL' }, read: [r(A, 'ta', 6.2), r(B, 'ta', 6.9)] },
  { name: 'titles of pH and acidity exchanged', bytes: utf8(`Code;pH;TA tartaric\n${A};6.2;3.41\n${B};6.9;3.38\n`), asked: { swapped: 'swap' }, read: [r(A, 'ph', 3.41), r(A, 'ta', 6.2), r(B, 'ph', 3.38), r(B, 'ta', 6.9)] },
  { name: 'labels behind an apostrophe or beside words of the lab', bytes: utf8(`Sample;Brix\n'${A};23.4\n${spellLabelCode(B)} - Furrow, zone 2;22.1\nNo. 3 (${C.toLowerCase()});21.0\n`), read: [r(A, 'brix', 23.4), r(B, 'brix', 22.1), r(C, 'brix', 21)] },
  { name: 'a cell that names another unit than its column', bytes: utf8(`Code;TA (g/L tartaric);Malic acid (g/L)\n${A};4,5 g/L H2SO4;1,9 g/L\n${B};6,9;1,8\n`), asked: { 'cellUnit:2:TA (g/L tartaric)': 'sulphuricGPerL' }, read: [r(A, 'ta', 6.89), r(A, 'malic', 1.9), r(B, 'ta', 6.9), r(B, 'malic', 1.8)] },
  { name: 'two figures in one cell, and a dilution', bytes: utf8(`Code;Brix;Malic acid g/L\n${A};23.4-23.8;2.1 (1:2)\n${B};22.1;1.9\n${C};21.0 / 21.4;1.8\n`), asked: { 'cell:2:Brix': 'leaveOut', 'cell:2:Malic acid g/L': 'leaveOut', 'cell:4:Brix': 'leaveOut' }, read: [r(B, 'brix', 22.1), r(B, 'malic', 1.9), r(C, 'malic', 1.8)] },
  {
    name: 'a bookkeeper’s sheet: merged titles, units below, a mean, a sum and remarks',
    bytes: writeXlsx({ August: [['Vendange 2026, laboratoire', null, null, null, null], ['Échantillon', 'Moût', null, 'Acidité', null], [null, 'Degré Brix', 'pH', 'Acidité totale', 'Acide malique'], [null, '°Bx', null, 'g/L H2SO4', 'g/L'], [A, 23.4, 3.41, 4.5, '<0,5'], [B, 22.1, 3.38, 4.9, 'n.d.'], ['Moyenne', { formula: 'AVERAGE(B5:B6)', value: 22.75 }, 3.395, 4.7, null], ['TOTAL', 45.5, null, null, null], ['* analysé le 3/9 par K. D., 2e passage demandé']] }, { August: { merged: ['A1:E1', 'B2:C2', 'D2:E2'] } }),
    read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(A, 'ta', 6.89), r(A, 'malic', '<0.5'), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(B, 'ta', 7.5)], said: ['notASample', 'noResult', 'readBelow'],
  },
  { name: 'two tables one below the other, the second with other columns', bytes: utf8(`Code;Brix;pH\n${A};23,4;3,41\n${B};22,1;3,38\n\nSample;Malic acid (g/L);TA (g/L tartaric)\n${B};1,9;6,9\n${A};2,1;6,2\n`), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(A, 'malic', 2.1), r(A, 'ta', 6.2), r(B, 'malic', 1.9), r(B, 'ta', 6.9)], said: ['tablesBelow'] },
  { name: 'titles repeated on every printed page', bytes: utf8(`Code;Brix;pH\n${A};23.4;3.41\n${B};22.1;3.38\nPage 2;;\nCode;Brix;pH\n${C};21.0;3.30\n`), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(C, 'brix', 21), r(C, 'ph', 3.3)], said: ['titlesAgain'] },
  { name: 'two tables side by side, in another order of the bags', bytes: writeXlsx({ R: [['Code', 'Brix', 'pH', null, 'Code', 'TA (g/L tartaric)'], [A, 23.4, 3.41, null, C, 7.4], [B, 22.1, 3.38, null, A, 6.2], [C, 21.3, 3.3, null, B, 6.9]] }), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(C, 'brix', 21.3), r(C, 'ph', 3.3), r(A, 'ta', 6.2), r(B, 'ta', 6.9), r(C, 'ta', 7.4)], said: ['tablesBeside'] },
  { name: 'rows that are hidden, days as bare counts', bytes: writeXlsx({ R: [['Code', 'Date', 'Brix'], [A, 46_268, 23.4], [B, 46_268, 22.1], [C, 45_903, 19.9], [D, 45_903, 18.2]] }, { R: { hiddenRows: [4, 5] } }), asked: { hidden: 'leaveOut' }, read: [r(A, 'brix', 23.4), r(B, 'brix', 22.1)] },
  { name: 'a hidden column that belongs to the results', bytes: writeXlsx({ R: [['Code', 'Brix', 'pH'], [A, 23.4, 3.41], [B, 22.1, 3.38]] }, { R: { hiddenColumns: [3] } }), asked: { hidden: 'show' }, read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38)] },
  { name: 'formulas whose results were never stored', bytes: writeXlsx({ R: [['Code', 'Brix', 'pH'], [A, 23.4, { formula: 'AVERAGE(3.40,3.42)', value: null }], [B, 22.1, 3.38]] }), read: [r(A, 'brix', 23.4), r(B, 'brix', 22.1), r(B, 'ph', 3.38)], said: ['emptyFormulas'] },
  { name: 'one result a line, the same measure in two units', bytes: utf8(`Sample;Parameter;Result;Unit\n${A};Total acidity;4,5;g/L H2SO4\n${B};Total acidity;6,9;g/L tartaric\n${A};Malic acid;1900;mg/L\n${B};Malic acid;1,8;g/L\n`), read: [r(A, 'ta', 6.89), r(B, 'ta', 6.9), r(A, 'malic', 1.9), r(B, 'malic', 1.8)], said: ['oneALine'] },
  { name: 'mixed decimal marks, an apostrophe before a figure, a bag twice with the lab’s own letter', bytes: utf8(`\uFEFF"Sample id";"Brix %";"pH"\n"'${A}";"'23,4 %";3.41\n"${B} a";22.1%;3,38\n"${B} b";22.3 %;3,40\n`), asked: { repeats: 'repeats' }, read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38), r(B, 'brix', 22.3), r(B, 'ph', 3.4)], said: ['mixedMarks'] },
  { name: 'a remark that names another bag is no second table', bytes: utf8(`Code;Brix;Remark;pH\n${A};23.4;leaked into ${B};3.41\n${B};22.1;see ${A};3.38\n`), read: [r(A, 'brix', 23.4), r(A, 'ph', 3.41), r(B, 'brix', 22.1), r(B, 'ph', 3.38)] },
  { name: 'results that a bag has already', bytes: utf8(`Code;pH\n${F};3.4\n`), asked: { again: 'replace' }, read: [r(F, 'ph', 3.4)] },
];
