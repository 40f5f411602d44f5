import { ref, watch } from 'vue';
import { potentialAlcohol, type PotentialAlcohol } from '../../shared/cellar/alcohol.ts';
import type { LotSummary } from '../../shared/contracts/lots.ts';
import { readStored, writeStored } from '../lib/deviceStore.ts';

/** Ways to potential alcohol that need no more than °Brix. */
export const brixMethods = ['brixFactor', 'solidsLessAllowance'] as const;
export type BrixMethod = (typeof brixMethods)[number];

const key = 'alcoholMethod';
const stored = readStored<string>(key);
const method = ref<BrixMethod>(brixMethods.find((one) => one === stored) ?? 'brixFactor');
watch(method, (chosen) => writeStored(key, chosen));

/** The way to potential alcohol that the reader chose, kept on the device, and what a lot comes to by it. */
export function useAlcoholMethod() {
  function alcoholOf({ brix, tankBrix }: LotSummary): PotentialAlcohol | null {
    const sugar = tankBrix?.figure ?? brix;
    if (sugar === null || sugar.halfWidth === null) return null;
    return potentialAlcohol({ lower: sugar.value - sugar.halfWidth, value: sugar.value, upper: sugar.value + sugar.halfWidth }, method.value);
  }
  return { method, alcoholOf };
}
