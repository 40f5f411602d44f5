import { describe, expect, it } from 'vitest';
import { phaseIds, phaseProblem, startingPhases } from '../../shared/season/phases.ts';

describe('phases of a season', () => {
  it.each([['2026-12-01', '2027-11-30'], ['2026-06-01', '2027-05-31'], ['2027-12-01', '2028-11-30']])('a season from %s starts with phases in order that lie within it', (startsOn, endsOn) => {
    const phases = startingPhases(startsOn);
    expect(Object.keys(phases)).toEqual([...phaseIds]);
    expect(phaseProblem(phases, { startsOn, endsOn })).toBeNull();
  });

  it('puts bloom in late spring on either side of the equator', () => {
    expect(startingPhases('2026-12-01').bloom).toEqual(['2027-05-22', '2027-06-09']);
    expect(startingPhases('2026-06-01').bloom).toEqual(['2026-11-20', '2026-12-08']);
  });

  it('names the phase that ends before it begins, leaves the season or runs into the one before', () => {
    const season = { startsOn: '2026-12-01', endsOn: '2027-11-30' };
    const phases = startingPhases(season.startsOn);
    expect(phaseProblem({ ...phases, bloom: ['2027-06-10', '2027-06-01'] }, season)).toEqual({ phase: 'bloom', problem: 'reversed' });
    expect(phaseProblem({ ...phases, review: ['2027-11-01', '2027-12-05'] }, season)).toEqual({ phase: 'review', problem: 'outside' });
    expect(phaseProblem({ ...phases, veraison: [phases.lagPhase![1], '2027-08-20'] }, season)).toEqual({ phase: 'veraison', problem: 'overlaps' });
    expect(phaseProblem({ pick: phases.pick! }, season)).toBeNull();
  });
});
