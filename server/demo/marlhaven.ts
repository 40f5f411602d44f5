import type { Role } from '../../shared/catalog/roles.ts';

/** The demo estate: an invention, laid on an empty hillside. Positions are metres east and north of the anchor of its place. */
export const estate = { name: 'Marlhaven', country: 'Invented' };

/** How the vines of a block really lie; the program has to find out. */
export type Truth = 'threeSteps' | 'twoSteps' | 'slope' | 'even';

export interface DemoBlock {
  key: string;
  name: string;
  variety: string;
  rootstock: string;
  plantedYear: number;
  rowBearingDeg: number;
  rowSpacingM: number;
  vineSpacingM: number;
  headlandM: number;
  startPost: string;
  endPost: string;
  ringM: readonly (readonly [number, number])[];
  truth: Truth;
  /** °Brix at the end of veraison, and gain a day. */
  brix: number;
  brixPerDay: number;
  clusters: number;
  clusterG: number;
}

export const blocks: readonly DemoBlock[] = [
  {
    key: 'heron', name: 'Heron Bank', variety: 'Syrah', rootstock: '110 Richter', plantedYear: 2004, rowBearingDeg: 72, rowSpacingM: 2.5, vineSpacingM: 1.1, headlandM: 5, startPost: 'white', endPost: 'red',
    ringM: [[60, 640], [300, 690], [322, 560], [250, 510], [70, 535]], truth: 'threeSteps', brix: 20.4, brixPerDay: 0.17, clusters: 22, clusterG: 128,
  },
  {
    key: 'furrow', name: 'Long Furrow', variety: 'Grenache', rootstock: '140 Ruggeri', plantedYear: 1998, rowBearingDeg: 96, rowSpacingM: 2.6, vineSpacingM: 1.2, headlandM: 5, startPost: 'yellow', endPost: 'blue',
    ringM: [[40, 450], [470, 418], [458, 296], [140, 322], [34, 345]], truth: 'threeSteps', brix: 21.2, brixPerDay: 0.19, clusters: 18, clusterG: 172,
  },
  {
    key: 'acre', name: "Tinker's Acre", variety: 'Cinsault', rootstock: 'SO4', plantedYear: 2011, rowBearingDeg: 20, rowSpacingM: 2.4, vineSpacingM: 1.0, headlandM: 4, startPost: 'white', endPost: 'green',
    ringM: [[420, 690], [590, 660], [560, 500], [440, 540]], truth: 'twoSteps', brix: 19.3, brixPerDay: 0.15, clusters: 20, clusterG: 205,
  },
  {
    key: 'millrace', name: 'Millrace', variety: 'Viognier', rootstock: '3309 Couderc', plantedYear: 2009, rowBearingDeg: 148, rowSpacingM: 2.2, vineSpacingM: 1.0, headlandM: 4, startPost: 'red', endPost: 'white',
    ringM: [[560, 430], [720, 470], [760, 330], [690, 310], [700, 250], [600, 228]], truth: 'twoSteps', brix: 21.6, brixPerDay: 0.16, clusters: 24, clusterG: 96,
  },
  {
    key: 'marl', name: 'High Marl', variety: 'Mourvèdre', rootstock: '110 Richter', plantedYear: 1992, rowBearingDeg: 118, rowSpacingM: 2.5, vineSpacingM: 1.25, headlandM: 6, startPost: 'blue', endPost: 'yellow',
    ringM: [[700, 760], [1010, 720], [1090, 560], [1040, 440], [820, 500], [690, 590]], truth: 'threeSteps', brix: 18.6, brixPerDay: 0.18, clusters: 19, clusterG: 150,
  },
  {
    key: 'stile', name: 'Stile Piece', variety: 'Roussanne', rootstock: 'Fercal', plantedYear: 2015, rowBearingDeg: 8, rowSpacingM: 2.3, vineSpacingM: 1.0, headlandM: 4, startPost: 'green', endPost: 'white',
    ringM: [[850, 380], [1020, 400], [1040, 270], [870, 240]], truth: 'even', brix: 20.9, brixPerDay: 0.14, clusters: 21, clusterG: 118,
  },
];

export interface DemoPerson {
  email: string;
  name: string;
  role: Role;
  language: string;
}

/** One person for each role, all invented. */
export const people: readonly DemoPerson[] = [
  { email: 'owner@demo.example', name: 'Hester Vane', role: 'owner', language: 'en' },
  { email: 'agronomist@demo.example', name: 'Ilan Moreau', role: 'agronomist', language: 'en' },
  { email: 'manager@demo.example', name: 'Tessa Brand', role: 'manager', language: 'en' },
  { email: 'winemaker@demo.example', name: 'Osric Pell', role: 'winemaker', language: 'en' },
  { email: 'crew@demo.example', name: 'Nuno Alvor', role: 'crew', language: 'en' },
  { email: 'crew2@demo.example', name: 'Lucía Serra', role: 'crew', language: 'es' },
  { email: 'lab@demo.example', name: 'Wanda Ries', role: 'lab', language: 'en' },
];

export const tanks = [
  { name: 'T1', litres: 32_000, workingFill: 0.8, minimumFill: 0.5 },
  { name: 'T2', litres: 48_000, workingFill: 0.8, minimumFill: 0.5 },
  { name: 'T3', litres: 28_000, workingFill: 0.85, minimumFill: 0.5 },
  { name: 'T4', litres: 18_000, workingFill: 0.8, minimumFill: 0.4 },
  { name: 'W1', litres: 12_000, workingFill: 0.9, minimumFill: 0.5 },
  { name: 'W2', litres: 8_000, workingFill: 0.9, minimumFill: 0.5 },
  { name: 'W3', litres: 5_500, workingFill: 0.9, minimumFill: 0.4 },
] as const;

export const demoPassword = 'patchrow-demo';
