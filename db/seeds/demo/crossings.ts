import type { Point } from './plane.ts';

/** Named junctions: roads pass through them, feeders part at them, villages stand on them. */
export const crossings = {
  'west gate': [-13, 7.5],
  'Tarn Gate': [-9.6, 5],
  'High Corrie': [-6.3, 2.7],
  'Pennick Bridge': [-2.75, 1.65],
  'North Gate': [0.75, 0.3],
  'Pellam Cross': [4.3, 0.7],
  'Sallow End': [8.5, 1.5],
  'east gate': [13, 2.7],
  'East Gate': [1.9, -1.42],
  Lathbourne: [4.55, -2.75],
  'Gannet Cross': [9, -3.7],
  Skerrow: [12.9, -3],
  'South Gate': [-0.1, -2.27],
  'Quay Bridge': [-0.22, -2.73],
  Quillon: [-1.9, -5],
  'Marl Pits': [-5, -7],
  'south gate': [-8.6, -9.4],
  Ostrey: [-9.3, -0.5],
  'Long Barrow': [-10.4, -4],
  'Drove End': [-10.2, -7.2],
  'Fallow Green': [-5.4, -2.5],
  'Upper Corrie': [-8.2, 8],
  'Corrie Bridge': [-5.15, 8.2],
  Hallin: [-1.7, 7.3],
  'Thorn Hay': [2.6, 6.2],
  'Broad Moor': [4.7, 3.6],
  'Wether Law': [8, 6.7],
  'moor gate': [12.9, 7.9],
  Ridding: [9.7, 4.2],
  'Cold Well': [-0.9, 3.8],
  Saltern: [4.2, -8],
} as const satisfies Record<string, Point>;

export type Crossing = keyof typeof crossings;

export function isCrossing(name: string): name is Crossing {
  return name in crossings;
}

/** Roads by hand: a name, a rank, and what they pass; a bare point only bends them. */
export const handDrawnRoads: readonly {
  name: string;
  rank: 'trunk' | 'road';
  via: readonly (Crossing | Point)[];
}[] = [
  {
    name: 'Vale Road',
    rank: 'trunk',
    via: [
      'west gate',
      [-11.2, 6.4],
      'Tarn Gate',
      [-8.1, 3.7],
      'High Corrie',
      [-4.6, 1.9],
      'Pennick Bridge',
      [-0.9, 1.2],
      'North Gate',
      [2.7, 0.35],
      'Pellam Cross',
      [6.4, 0.75],
      'Sallow End',
      [10.7, 2.4],
      'east gate',
    ],
  },
  {
    name: 'Coast Road',
    rank: 'trunk',
    via: ['East Gate', [3.2, -2.1], 'Lathbourne', [6.6, -2.9], 'Gannet Cross', [11, -3.5], 'Skerrow'],
  },
  {
    name: 'Southway',
    rank: 'trunk',
    via: [
      'South Gate',
      'Quay Bridge',
      [-0.8, -3.8],
      'Quillon',
      [-3.5, -5.7],
      'Marl Pits',
      [-6.9, -7.9],
      'south gate',
      [-9.4, -10],
    ],
  },
  {
    name: 'Ostrey Road',
    rank: 'road',
    via: [
      'High Corrie',
      [-7.5, 1.4],
      'Ostrey',
      [-10.3, -2.2],
      'Long Barrow',
      [-9.9, -5.6],
      'Drove End',
      [-9.9, -8.2],
      'south gate',
    ],
  },
  {
    name: 'Mill Road',
    rank: 'road',
    via: ['Ostrey', [-7.6, -2], 'Fallow Green', [-3.9, -3.6], 'Quillon'],
  },
  { name: 'Pennick Road', rank: 'road', via: ['Pennick Bridge', [-3.9, -0.3], 'Fallow Green'] },
  {
    name: 'Corrie Road',
    rank: 'road',
    via: [
      'Tarn Gate',
      [-9.4, 6.7],
      'Upper Corrie',
      [-6.6, 8.7],
      'Corrie Bridge',
      [-3.4, 7.4],
      'Hallin',
      [0.4, 7.1],
      'Thorn Hay',
      [4.1, 4.9],
      'Broad Moor',
      [4.2, 2.1],
      'Pellam Cross',
    ],
  },
  {
    name: 'Moor Road',
    rank: 'road',
    via: ['Thorn Hay', [4.4, 6.7], [5.8, 6.9], 'Wether Law', [10.3, 7], 'moor gate'],
  },
  {
    name: 'Ridding Road',
    rank: 'road',
    via: ['Sallow End', [9.3, 2.8], 'Ridding', [9.3, 5.6], 'Wether Law'],
  },
  { name: 'Gannet Road', rank: 'road', via: ['Sallow End', [9.3, -0.2], [8.9, -2.1], 'Gannet Cross'] },
  { name: 'Pellam Lane', rank: 'road', via: ['Pellam Cross', [4.9, -0.9], 'Lathbourne'] },
  {
    name: 'Hallin Road',
    rank: 'road',
    via: ['Hallin', [-1.6, 5.5], 'Cold Well', [-0.3, 2.2], [0.45, 1.1], 'North Gate'],
  },
  {
    name: 'Saltern Road',
    rank: 'road',
    via: ['Quillon', [-0.4, -5.9], [1.6, -7.5], 'Saltern'],
  },
];
