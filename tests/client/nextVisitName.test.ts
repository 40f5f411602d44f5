import { describe, expect, it } from 'vitest';
import { nextVisitName } from '../../src/lib/nextVisitName.ts';

const english = (name: string, n: string) => `${name}, visit ${n}`;

describe('the name of the next visit', () => {
  it('counts the visits instead of growing with each', () => {
    let name = 'Samples in Heron Bank';
    for (let visit = 2; visit <= 12; visit++) {
      name = nextVisitName(name, english);
      expect(name).toBe(`Samples in Heron Bank, visit ${visit}`);
    }
  });

  it('stays within what a name may have', () => {
    const long = nextVisitName('x'.repeat(80), english);
    expect(long).toHaveLength(80);
    expect(long).toMatch(/x, visit 2$/);
    expect(nextVisitName(long, english)).toMatch(/x, visit 3$/);
    expect(nextVisitName(long, english)).toHaveLength(80);
  });

  it('takes no other number at the end for a visit', () => {
    expect(nextVisitName('Block 7', english)).toBe('Block 7, visit 2');
    expect(nextVisitName('Hill, visit again', english)).toBe('Hill, visit again, visit 2');
    expect(nextVisitName('A, visit 1', english)).toBe('A, visit 2');
  });
});
