import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';

/** What to say where there is none. */
export const notFedNote = 'No source feeds the point of interconnection.';

/** The operating cases in which a source feeds the point of interconnection: in the others there is no project to speak of. */
export function listFedCases({ cases }: Screening): OperatingCase[] {
  return cases.filter(({ upstream: { path, isSource } }) => isSource[path.at(-1)!] === 1);
}
