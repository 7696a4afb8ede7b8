import type { RoomSize } from './schemas/rooms.ts';
import { questions } from './schemas/findings.ts';

export type RoomPlant = 'inverters' | 'machine';

export const roomPlantWords: Record<RoomPlant, { label: string; meaning: string }> = {
  inverters: {
    label: 'Inverters',
    meaning: 'Solar inverters, three-phase, listed, that give 1.2 times their rated current at a fault.',
  },
  machine: {
    label: 'Synchronous machine',
    meaning:
      'A machine with a subtransient reactance of 0.16 per unit behind a transformer of its own size with 6 %, grounded star on the utility side and delta on the site side, a reactor in its neutral so that X0/X1 is 2.5.',
  },
};

/** Said wherever room is shown. */
export const roomCaution =
  'One project at a time; not additive: what is taken at one place is gone at others. The plants are usual ones, and a real project is screened by its own data.';

/** How room is drawn: the more, the heavier the line; none is hatched. `from` is the least kVA of the class. */
export const roomClasses = [
  { key: 'none', from: 0, label: 'Under 50 kVA' },
  { key: 'some', from: 50, label: '50 to under 500 kVA' },
  { key: 'more', from: 500, label: '500 to under 2,000 kVA' },
  { key: 'most', from: 2000, label: '2,000 kVA and more' },
] as const;
export type RoomClass = (typeof roomClasses)[number]['key'];

export function classOfRoom({ kva }: RoomSize): RoomClass {
  return roomClasses.findLast(({ from }) => kva >= from)?.key ?? 'none';
}

/** What keeps a plant from being larger, as a reader says it. */
export function describeBinding({ bindsAt }: RoomSize): string {
  if (bindsAt === null) return 'The largest size that is looked at passes';
  const question = questions.find(({ id }) => id === bindsAt.question)?.question ?? bindsAt.question;
  return bindsAt.element === null ? question : `${question} (${bindsAt.element})`;
}
