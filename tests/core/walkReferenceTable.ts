import type { AisleCase } from './walkCases.ts';

/**
 * The seven-state table of Ratliff & Rosenthal 1983 for closed walks with two headlands and each target in one aisle,
 * written out as a table: a second exact method, to hold against the general programme.
 * State: degree class at bottom and top (0, Even, odd U) and number of components.
 */
const inAisle: Record<string, Partial<Record<'none' | 'top' | 'bottom' | 'gap' | 'one' | 'two', string>>> = {
  '000': { none: '000', top: '0E1', bottom: 'E01', gap: 'EE2', one: 'UU1', two: 'EE1' },
  UU1: { none: 'UU1', top: 'UU1', bottom: 'UU1', gap: 'UU1', one: 'EE1', two: 'UU1' },
  E01: { none: 'E01', top: 'EE2', bottom: 'E01', gap: 'EE2', one: 'UU1', two: 'EE1' },
  '0E1': { none: '0E1', top: '0E1', bottom: 'EE2', gap: 'EE2', one: 'UU1', two: 'EE1' },
  EE1: { none: 'EE1', top: 'EE1', bottom: 'EE1', gap: 'EE1', one: 'UU1', two: 'EE1' },
  EE2: { none: 'EE2', top: 'EE2', bottom: 'EE2', gap: 'EE2', one: 'UU1', two: 'EE1' },
  '001': { none: '001' },
};
const onward: Record<string, readonly (readonly [x: number, y: number, to: string])[]> = {
  '000': [[0, 0, '000'], [0, 2, '0E1'], [2, 0, 'E01'], [2, 2, 'EE2']],
  UU1: [[1, 1, 'UU1']],
  E01: [[0, 0, '001'], [2, 0, 'E01'], [2, 2, 'EE2']],
  '0E1': [[0, 0, '001'], [0, 2, '0E1'], [2, 2, 'EE2']],
  EE1: [[0, 0, '001'], [0, 2, '0E1'], [2, 0, 'E01'], [2, 2, 'EE1']],
  EE2: [[2, 2, 'EE2']],
  '001': [[0, 0, '001']],
};

export function sevenStates(aisles: AisleCase): number {
  if (aisles.aisles.every(([, , targets]) => (targets ?? []).length === 0)) return 0;
  const [gateAisle, gateEnd] = aisles.gate;
  let states = new Map<string, number>([['000', 0]]);
  aisles.aisles.forEach(([bottom, top, targets = []], j) => {
    const options = aisleOptions(bottom, top, targets);
    const next = new Map<string, number>();
    for (const [state, length] of states) {
      for (const [option, cost] of Object.entries(options)) {
        const within = inAisle[state]![option as keyof typeof options];
        if (within === undefined) continue;
        const ways = j === aisles.aisles.length - 1 ? onward[within]!.filter(([x, y]) => x === 0 && y === 0) : onward[within]!;
        for (const [x, y, to] of ways) {
          const gateIsUsed = gateEnd === 'b' ? within[0] !== '0' || x > 0 : within[1] !== '0' || y > 0;
          if (j === gateAisle && (state === '001' || !gateIsUsed)) continue;
          const total = length + cost + x * (aisles.bottom[j] ?? 0) + y * (aisles.top[j] ?? 0);
          next.set(to, Math.min(next.get(to) ?? Infinity, total));
        }
      }
    }
    states = next;
  });
  return states.get('001')!;
}

function aisleOptions(bottom: number, top: number, targets: readonly number[]): Partial<Record<'none' | 'top' | 'bottom' | 'gap' | 'one' | 'two', number>> {
  const through = { one: top - bottom, two: 2 * (top - bottom) };
  if (targets.length === 0) return { none: 0, ...through };
  const [first, last] = [targets[0]!, targets.at(-1)!];
  const widest = Math.max(0, ...targets.slice(1).map((t, i) => t - targets[i]!));
  return { ...through, top: 2 * (top - first), bottom: 2 * (last - bottom), ...(targets.length >= 2 ? { gap: 2 * (top - bottom - widest) } : {}) };
}
