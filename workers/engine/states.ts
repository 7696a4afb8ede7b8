import type { Study } from '../../shared/schemas/study.ts';
import type { CaseChoice } from './case.ts';

/* The four cases that every study reports. */

export type StateName = 'none' | 'before' | 'after' | 'minimum';

/** Gives the choice behind a state's name. */
export function choiceOfState(state: StateName, { prefaultFactor }: Study): CaseChoice {
  const generators = state === 'before' || state === 'after' ? 'all' : 'none';
  return {
    sources: state === 'minimum' ? 'min' : 'max',
    prefaultFactor: state === 'minimum' ? prefaultFactor.min : prefaultFactor.max,
    machines: generators,
    inverters: generators,
    groundingBanks: 'all',
    project: state === 'after',
    companions: state !== 'none',
  };
}
