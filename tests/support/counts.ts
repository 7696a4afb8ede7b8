export interface Counts {
  passed: number;
  failed: number;
  skipped: number;
}

/** The last line of a test run, in the one form that CI reads. */
export function plainLine({ passed, failed, skipped }: Counts): string {
  return `${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}`;
}

export function addCounts(parts: Counts[]): Counts {
  const sum = (key: keyof Counts) => parts.reduce((total, part) => total + part[key], 0);
  return { passed: sum('passed'), failed: sum('failed'), skipped: sum('skipped') };
}
