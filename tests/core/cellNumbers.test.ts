import { describe, expect, it } from 'vitest';
import { cellNumber, columnMark, plainNumber } from '../../shared/importing/cellNumbers.ts';

describe('cells that are nothing but a number', () => {
  it.each([['12', 12], ['-3.5', -3.5], ['0.25', 0.25], ['007', 7]])('reads %s at once', (cell, value) => {
    expect(plainNumber(cell, '.')).toBe(value);
  });

  it.each(['', '-', '.5', '5.', '1.2.3', '1e5', '+4', ' 4', '12,5', '4 m', '٣'])('leaves "%s" to the reader of odd cells', (cell) => {
    expect(plainNumber(cell, '.')).toBeNull();
  });

  it('takes no point for decimals where the comma is', () => {
    expect(plainNumber('1.234', ',')).toBeNull();
    expect(cellNumber('1.234', ',').value).toBe(1234);
  });

  it('finds the one comma among a thousand points', () => {
    const points = Array.from({ length: 1000 }, () => '12.53');
    expect(columnMark(points, ',')).toBe('.');
    expect(columnMark([...points, '12,53'], ',')).toBe(',');
  });
});
