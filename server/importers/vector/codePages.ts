/** Text encodings of attribute tables: names in .cpg files and language codes in table headers. */

/** Upper halves of the two DOS code pages that old Western European tables use; the browser standard leaves them out. */
const dos437 = 'ÇüéâäàåçêëèïîìÄÅÉæÆôöòûùÿÖÜ¢£¥₧ƒáíóúñÑªº¿⌐¬½¼¡«»░▒▓│┤╡╢╖╕╣║╗╝╜╛┐└┴┬├─┼╞╟╚╔╩╦╠═╬╧╨╤╥╙╘╒╓╫╪┘┌█▄▌▐▀αßΓπΣσµτΦΘΩδ∞φε∩≡±≥≤⌠⌡÷≈°∙·√ⁿ²■\u00a0';
const dos850 = 'ÇüéâäàåçêëèïîìÄÅÉæÆôöòûùÿÖÜø£Ø×ƒáíóúñÑªº¿®¬½¼¡«»░▒▓│┤ÁÂÀ©╣║╗╝¢¥┐└┴┬├─┼ãÃ╚╔╩╦╠═╬¤ðÐÊËÈıÍÎÏ┘┌█▄¦Ì▀ÓßÔÒõÕµþÞÚÛÙýÝ¯´\u00ad±‗¾¶§÷¸°¨·¹³²■\u00a0';

/** Language driver codes of dBASE headers (ESRI and dBASE lists; common practice). */
const drivers: Readonly<Record<number, string>> = {
  0x01: '437',
  0x02: '850',
  0x03: '1252',
  0x57: '1252',
  0x58: '1252',
  0x59: '1252',
  0x64: '1250',
  0x65: '866',
  0x78: 'big5',
  0x79: 'euc-kr',
  0x7a: 'gbk',
  0x7b: 'shift_jis',
  0xc8: '1250',
  0xc9: '1251',
  0xca: '1254',
  0xcb: '1253',
};

/** Windows numbers of double-byte code pages under the names that the browser standard gives them. */
const eastAsian: Readonly<Record<string, string>> = { '932': 'shift_jis', '936': 'gbk', '949': 'euc-kr', '950': 'big5' };

export interface CodePage {
  name: string;
  decode: (bytes: Uint8Array) => string;
}

/** The encoding that a .cpg text or, without one, a header code names; null when neither is known. */
export function codePage(cpg: string | null, driver: number): CodePage | null {
  const named = cpg === null ? null : fromName(cpg);
  if (named !== null) return named;
  const fromDriver = drivers[driver];
  return fromDriver === undefined ? null : fromName(fromDriver);
}

function fromName(text: string): CodePage | null {
  const plain = text.replace(/[\uFEFF\0]/g, '').trim().toLowerCase().replace(/^(ansi|oem|cp|windows-|windows|ibm)\s*/, '');
  if (plain === '437' || plain === '850') return { name: `DOS ${plain}`, decode: (bytes) => fromTable(bytes, plain === '437' ? dos437 : dos850) };
  const label = eastAsian[plain] ?? (plain === '65001' || plain === 'utf8' ? 'utf-8' : /^125\d$/.test(plain) ? `windows-${plain}` : /^8859-?\d+$/.test(plain) ? `iso-8859-${plain.replace(/^8859-?/, '')}` : /^\d+$/.test(plain) ? `ibm${plain}` : plain);
  try {
    const decoder = new TextDecoder(label);
    return { name: label, decode: (bytes) => decoder.decode(bytes) };
  } catch {
    return null;
  }
}

function fromTable(bytes: Uint8Array, upper: string): string {
  let out = '';
  for (const byte of bytes) out += byte < 128 ? String.fromCharCode(byte) : upper[byte - 128]!;
  return out;
}
