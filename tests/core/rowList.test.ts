import { describe, expect, it } from 'vitest';
import { rowsOfList } from '../../shared/field/rowList.ts';

const rows = ['1', '2', '3', '4', '5', '5-b', '6'].map((label) => ({ id: `id ${label}`, label }));
const ids = (text: string) => rowsOfList(text, rows);

describe('rows as people list them', () => {
  it('reads single labels and spans in the order in which the rows stand', () => {
    expect(ids('4, 1-2')).toEqual({ rowIds: ['id 1', 'id 2', 'id 4'] });
    expect(ids('6 – 4')).toEqual({ rowIds: ['id 4', 'id 5', 'id 5-b', 'id 6'] });
    expect(ids('5-B; 1')).toEqual({ rowIds: ['id 1', 'id 5-b'] });
  });
  it('takes nothing for the whole block', () => expect(ids(' , ')).toEqual({ rowIds: null }));
  it('names what is no row, and never leaves it out silently', () => {
    expect(ids('2, 9')).toEqual({ unknown: '9' });
    expect(ids('2-11')).toEqual({ unknown: '11' });
    expect(ids('1-2-3')).toEqual({ unknown: '1-2-3' });
  });
});
