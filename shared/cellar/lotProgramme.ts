import { LEFT_OUT_COST, tankKinds, type ChoiceTank, type ChoiceZone, type LotChoice } from './lotChoices.ts';

/**
 * The choice of lots as an integer programme in LP text: `y<k>` is 1 when grouping k is made, `u<i>` when zone i is
 * left out. Each zone is in one grouping or left out, tanks of a kind hold as many lots as there are of them.
 */
export function lotProgramme(zones: readonly ChoiceZone[], tanks: readonly ChoiceTank[], choices: readonly LotChoice[]): string {
  const term = (cost: number, name: string) => `${cost < 0 ? '-' : '+'} ${Math.abs(cost).toFixed(6)} ${name}`;
  const cost = [...choices.map((choice, k) => term(choice.cost, `y${k}`)), ...zones.map(({ tonnes }, i) => term(LEFT_OUT_COST * tonnes.value, `u${i}`))];
  const holding = (test: (choice: LotChoice) => boolean) => choices.flatMap((choice, k) => (test(choice) ? [`y${k}`] : []));
  const zoneRows = zones.map((_, i) => ` z${i}: ${[...holding((choice) => choice.zones.includes(i)), `u${i}`].join(' + ')} = 1`);
  const kinds = tankKinds(tanks);
  const tankRows = [...new Set(kinds)].flatMap((kind) => {
    const inside = holding((choice) => choice.tank === kind);
    const many = kinds.filter((one) => one === kind).length;
    return inside.length > many ? [` t${kind}: ${inside.join(' + ')} <= ${many}`] : [];
  });
  const names = [...choices.map((_, k) => `y${k}`), ...zones.map((_, i) => `u${i}`)];
  // Long lines are cut, since readers of this format limit them.
  return ['Minimize', ` cost: ${cost.join('\n ')}`, 'Subject To', ...[...zoneRows, ...tankRows].map(folded), 'Binary', ...names.map((name) => ` ${name}`), 'End', ''].join('\n');
}

const foldAt = 12;

function folded(row: string): string {
  return row.split(' + ').map((part, index) => (index > 0 && index % foldAt === 0 ? `\n + ${part}` : index > 0 ? ` + ${part}` : part)).join('');
}

/** What a set of choices costs together with the zones that it leaves out: what the programme makes least. */
export function programmeCost(zones: readonly ChoiceZone[], chosen: readonly LotChoice[]): number {
  const placed = new Set(chosen.flatMap((choice) => choice.zones));
  const left = zones.reduce((sum, { tonnes }, i) => sum + (placed.has(i) ? 0 : LEFT_OUT_COST * tonnes.value), 0);
  return left + chosen.reduce((sum, { cost }) => sum + cost, 0);
}

/** A set of choices found by taking what places the most tonnes at the least cost, again and again: seldom the best, always at once. */
export function greedyChoice(tanks: readonly ChoiceTank[], choices: readonly LotChoice[]): LotChoice[] {
  const kinds = tankKinds(tanks);
  const free = new Map(kinds.map((kind) => [kind, kinds.filter((one) => one === kind).length]));
  const placed = new Set<number>();
  return [...choices].sort((a, b) => gain(b) - gain(a)).filter(({ zones, tank }) => {
    if (free.get(tank)! === 0 || zones.some((zone) => placed.has(zone))) return false;
    free.set(tank, free.get(tank)! - 1);
    zones.forEach((zone) => placed.add(zone));
    return true;
  });
}

function gain({ tonnes, cost }: LotChoice): number {
  return LEFT_OUT_COST * tonnes - cost;
}
