import { smoothNoise, step, type Field } from './smoothNoise.ts';
import type { DemoPlace } from './demoPlace.ts';
import type { DemoBlock } from './marlhaven.ts';

/** What lies under and on the vines, as functions of metres from the anchor. */
export interface Ground {
  place: DemoPlace;
  elevationM: Field;
  /** Depth to the marl, in metres: what vigour follows. */
  soilDepthM: Field;
  /** 0 … 1, what a vine makes of its place in this block. */
  vigour: (block: DemoBlock) => Field;
  /** Apparent conductivity, mS/m: deeper soil holds more water and conducts better. */
  conductivity: (block: DemoBlock) => Field;
}

/** A south-facing hillside with two spurs, a hollow between them and shallow marl on the crests. */
export function makeGround(seed: number, place: DemoPlace): Ground {
  const broad = smoothNoise(seed + 1, 260);
  const middle = smoothNoise(seed + 2, 110);
  const fine = smoothNoise(seed + 3, 34);
  const bent = smoothNoise(seed + 4, 170);

  const elevationM: Field = (x, y) => 128 + 0.055 * y + 9 * broad(x, y) + 3.2 * middle(x, y) + 6 * Math.sin((x + 40 * bent(x, y)) / 150);
  const soilDepthM: Field = (x, y) => Math.max(0.25, 1.05 - 0.42 * Math.sin((x + 46 * bent(x, y)) / 150 + 0.4) + 0.3 * middle(x + 300, y) + 0.1 * fine(x, y));
  const conductivity = (block: DemoBlock): Field => {
    const [low, high] = block.truth === 'twoSteps' ? middleOf(thresholds(block, soilDepthM)) : thresholds(block, soilDepthM);
    const steps = block.truth === 'even' ? () => 14 : (x: number, y: number) => 11 + 17 * step(soilDepthM(x, y), low, 0.03) + (high > low ? 15 * step(soilDepthM(x, y), high, 0.03) : 0);
    return (x, y) => Math.max(3, steps(x, y) + (block.truth === 'even' ? 0 : 1.2 * fine(x + 900, y)));
  };

  const vigour = (block: DemoBlock): Field => {
    const [minX, , maxX] = extentOf(block);
    const own = (x: number, y: number) => soilDepthM(x, y) + 0.05 * fine(x + 500, y + 200);
    switch (block.truth) {
      case 'threeSteps': {
        const [low, high] = thresholds(block, own);
        return (x, y) => 0.22 + 0.26 * step(own(x, y), low, 0.025) + 0.3 * step(own(x, y), high, 0.025);
      }
      case 'twoSteps': {
        const [low, high] = thresholds(block, own);
        return (x, y) => 0.3 + 0.38 * step(own(x, y), (low + high) / 2, 0.025);
      }
      case 'slope':
        return (x) => 0.25 + (0.5 * (x - minX)) / (maxX - minX);
      case 'even':
        return () => 0.5;
    }
  };
  return { place, elevationM, soilDepthM, vigour, conductivity };
}

/** Thirds of the block by area, so that each step has room. */
function thresholds(block: DemoBlock, field: Field): [number, number] {
  const [minX, minY, maxX, maxY] = extentOf(block);
  const values: number[] = [];
  for (let i = 0; i < 40; i++) for (let j = 0; j < 40; j++) values.push(field(minX + ((i + 0.5) * (maxX - minX)) / 40, minY + ((j + 0.5) * (maxY - minY)) / 40));
  values.sort((a, b) => a - b);
  return [values[Math.floor(values.length * 0.34)]!, values[Math.floor(values.length * 0.67)]!];
}

export function extentOf(block: DemoBlock): [number, number, number, number] {
  const xs = block.ringM.map(([x]) => x);
  const ys = block.ringM.map(([, y]) => y);
  return [Math.min(...xs), Math.min(...ys), Math.max(...xs), Math.max(...ys)];
}

function middleOf([low, high]: [number, number]): [number, number] {
  return [(low + high) / 2, (low + high) / 2];
}
