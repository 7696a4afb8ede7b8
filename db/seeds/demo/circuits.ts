import type { Crossing } from './crossings.ts';

/** A length of road that carries a feeder from one junction to the next, in the direction of the source's power. */
export interface Stretch {
  road: string;
  from: string;
  to: string;
  carries: 'mainline' | 'branch' | 'lateral';
  /** A recloser stands on the first span. */
  recloser?: string;
  /** The last pole stands this far before the junction. */
  stopShortKm?: number;
}

export interface CircuitPlan {
  code: string;
  spacingKm: number;
  peakKw: number;
  seed: number;
  /** Which side of the road its poles stand on, so that two circuits on one road are two lines. */
  side: 1 | -1;
  stretches: readonly Stretch[];
}

function follow(
  road: string,
  carries: Stretch['carries'],
  ...stops: readonly (Crossing | [Crossing, string])[]
): Stretch[] {
  const named = stops.map((stop) => (typeof stop === 'string' ? ([stop, undefined] as const) : stop));
  return named.slice(1).map(([to, recloser], i) => ({ road, from: named[i]![0], to, carries, recloser }));
}

/** Each stop may name the recloser at the start of the span that leads to it. */
export const countryCircuits: readonly CircuitPlan[] = [
  {
    code: 'HC1',
    spacingKm: 0.41,
    peakKw: 9400,
    seed: 24_901,
    side: 1,
    stretches: [
      ...follow('Vale Road', 'mainline', 'High Corrie', 'Tarn Gate'),
      ...follow('Corrie Road', 'mainline', 'Tarn Gate', ['Upper Corrie', 'HC1-R1'], 'Corrie Bridge', [
        'Hallin',
        'HC1-R2',
      ]),
      ...follow('Hallin Road', 'branch', 'Hallin', 'Cold Well'),
      ...follow('Vale Road', 'branch', 'Tarn Gate', 'west gate'),
      ...follow('Vale Road', 'mainline', 'High Corrie', 'Pennick Bridge'),
    ],
  },
  {
    code: 'HC2',
    spacingKm: 0.41,
    peakKw: 7600,
    seed: 24_902,
    side: -1,
    stretches: [
      ...follow('Ostrey Road', 'mainline', 'High Corrie', 'Ostrey', ['Long Barrow', 'HC2-R1'], 'Drove End'),
      ...follow('Mill Road', 'mainline', 'Ostrey', ['Fallow Green', 'HC2-R2'], 'Quillon'),
      {
        road: 'Pennick Road',
        from: 'Fallow Green',
        to: 'Pennick Bridge',
        carries: 'mainline',
        stopShortKm: 0.06,
      },
      ...follow('Southway', 'branch', 'Quillon', ['Marl Pits', 'HC2-R3']),
      ...follow('Saltern Road', 'branch', 'Quillon', 'Saltern'),
    ],
  },
  {
    code: 'PL1',
    spacingKm: 0.34,
    peakKw: 6700,
    seed: 12_471,
    side: 1,
    stretches: [
      ...follow('Pellam Lane', 'mainline', 'Pellam Cross', 'Lathbourne'),
      {
        road: 'Coast Road',
        from: 'Lathbourne',
        to: 'Gannet Cross',
        carries: 'mainline',
        recloser: 'PL1-R1',
        stopShortKm: 0.06,
      },
      { road: 'Coast Road', from: 'Lathbourne', to: 'East Gate', carries: 'branch', stopShortKm: 0.16 },
      ...follow('Corrie Road', 'mainline', 'Pellam Cross', 'Broad Moor', ['Thorn Hay', 'PL1-R2']),
      ...follow('Vale Road', 'branch', 'Pellam Cross', 'North Gate'),
    ],
  },
  {
    code: 'PL2',
    spacingKm: 0.34,
    peakKw: 6100,
    seed: 12_472,
    side: -1,
    stretches: [
      ...follow('Vale Road', 'mainline', 'Pellam Cross', 'Sallow End'),
      ...follow('Gannet Road', 'mainline', 'Sallow End', ['Gannet Cross', 'PL2-R1']),
      ...follow('Coast Road', 'branch', 'Gannet Cross', 'Skerrow'),
      ...follow('Ridding Road', 'mainline', 'Sallow End', ['Ridding', 'PL2-R2'], 'Wether Law'),
      { road: 'Moor Road', from: 'Wether Law', to: 'Thorn Hay', carries: 'mainline', stopShortKm: 0.06 },
      ...follow('Vale Road', 'branch', 'Sallow End', 'east gate'),
    ],
  },
];
