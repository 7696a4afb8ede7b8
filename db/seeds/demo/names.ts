import type { Crossing } from './crossings.ts';

/** Settlements and how far, in km, their houses reach along the roads. */
export const villages: Partial<Record<Crossing, number>> = {
  'Tarn Gate': 0.3,
  'High Corrie': 0.45,
  'Pennick Bridge': 0.35,
  'Pellam Cross': 0.55,
  'Sallow End': 0.5,
  Lathbourne: 0.6,
  'Gannet Cross': 0.4,
  Quillon: 0.5,
  'Marl Pits': 0.3,
  Ostrey: 0.6,
  'Long Barrow': 0.35,
  'Fallow Green': 0.45,
  'Upper Corrie': 0.4,
  Hallin: 0.5,
  'Thorn Hay': 0.4,
  'Wether Law': 0.4,
  Ridding: 0.35,
  'Cold Well': 0.3,
  Saltern: 0.4,
};

const firstWords = [
  'Teasel',
  'Bracken',
  'Curlew',
  'Larch',
  'Withy',
  'Kestrel',
  'Hob',
  'Millrace',
  'Gorse',
  'Barley',
  'Plover',
  'Sorrel',
  'Whin',
  'Alder',
  'Crane',
  'Fold',
  'Stell',
  'Otter',
  'Dunnock',
  'Rushy',
  'Marl',
  'Heron',
  'Flax',
  'Tansy',
  'Clover',
  'Hawk',
  'Brock',
  'Yarrow',
  'Lapwing',
  'Sedge',
  'Rowan',
  'Pease',
  'Cinder',
  'Lime',
  'Wren',
  'Juniper',
  'Tallow',
  'Osier',
  'Ember',
  'Vetch',
] as const;
const lastWords = [
  'Lane',
  'Drove',
  'Way',
  'Row',
  'Loan',
  'Bank',
  'Rigg',
  'Walk',
  'End',
  'Garth',
  'Hollow',
  'Rise',
] as const;

/** The n-th lane name; all differ until the words run out, then a compass word is put in front. */
export function laneName(n: number): string {
  const pairs = firstWords.length * lastWords.length;
  // 7 and 480 share no divisor: neighbouring numbers get words that are far apart.
  const shuffled = (n * 7 + Math.floor(n / pairs)) % pairs;
  const name = `${firstWords[shuffled % firstWords.length]} ${lastWords[Math.floor(shuffled / firstWords.length)]}`;
  return n < pairs ? name : `North ${name}`;
}
