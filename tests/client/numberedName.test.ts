import { describe, expect, it } from 'vitest';
import { nextVisitName, versionName } from '../../src/lib/numberedName.ts';

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

describe('the name of a plan on other zones', () => {
  const onVersion = (name: string, version: number) => versionName(name, version, (plan, n) => `${plan}, version ${n}`);

  it('ends in the version and takes the place of an earlier one', () => {
    expect(onVersion('Samples in Heron Bank', 3)).toBe('Samples in Heron Bank, version 3');
    expect(onVersion('Samples in Heron Bank, version 3', 5)).toBe('Samples in Heron Bank, version 5');
    expect(onVersion('Samples, visit 2', 3)).toBe('Samples, visit 2, version 3');
  });

  it('stays within what a name may have', () => {
    expect(onVersion('x'.repeat(80), 12)).toMatch(/x, version 12$/);
    expect(onVersion('x'.repeat(80), 12)).toHaveLength(80);
  });
});
