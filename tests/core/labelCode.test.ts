import { describe, expect, it } from 'vitest';
import { checkLetter, LABEL_CODES, LABEL_LETTERS, labelCode, readLabelCode, spellLabelCode } from '../../shared/field/labelCode.ts';
import { seededRandom } from '../../shared/analysis/random.ts';

const random = seededRandom(7);
const some = Array.from({ length: 60 }, () => labelCode(Math.floor(random() * LABEL_CODES)));

describe('codes of labels', () => {
  it('has a code for each number, and no two alike', () => {
    expect(labelCode(0)).toBe('BBBBBB');
    // By hand: C is 1, its weight 5; 5 + 6v = 19·k first holds for v = 12 (77 is no multiple), v = 15 (95 = 5·19), the letter V.
    expect(labelCode(1)).toBe('BBBBCV');
    expect(new Set(Array.from({ length: 5000 }, (_, number) => labelCode(number))).size).toBe(5000);
    expect(() => labelCode(LABEL_CODES)).toThrow();
  });

  it('catches every single wrong letter and every exchange of two', () => {
    for (const code of some) {
      for (let place = 0; place < 6; place++) {
        for (const letter of LABEL_LETTERS) {
          const wrong = code.slice(0, place) + letter + code.slice(place + 1);
          expect('code' in readLabelCode(wrong)).toBe(letter === code[place]);
        }
        for (let other = place + 1; other < 6; other++) {
          const letters = [...code];
          [letters[place], letters[other]] = [letters[other]!, letters[place]!];
          expect('code' in readLabelCode(letters.join(''))).toBe(code[place] === code[other]);
        }
      }
    }
  });

  it('is text to every spreadsheet: no figure, no vowel, so no number, date, exponent or truth value', () => {
    for (const code of some) {
      expect(code).toMatch(/^[B-DF-HJ-NPR-TV-XZ]{6}$/u);
      expect(Number(code)).toBeNaN();
      expect(Number.isNaN(Date.parse(code))).toBe(true);
      expect(Number.isNaN(Date.parse(spellLabelCode(code)))).toBe(true);
    }
  });

  it('reads what people type and scanners send', () => {
    const code = some[0]!;
    for (const typed of [code, code.toLowerCase(), spellLabelCode(code), ` ${code.slice(0, 3)}-${code.slice(3)} `, `https://estate.example/l/${code}`]) {
      expect(readLabelCode(typed)).toEqual({ code });
    }
    expect(readLabelCode('KDT')).toEqual({ problem: 'length', at: 'KDT' });
    expect(readLabelCode('KDT0RX')).toEqual({ problem: 'letter', at: '0' });
    expect(checkLetter('BBBBC')).toBe('V');
    expect(readLabelCode('BBBBCW')).toEqual({ problem: 'check', at: 'BBBBCW' });
  });
});
