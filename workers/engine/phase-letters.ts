/** Writes a set of phases as its letters: 5 is "AC". */
export function lettersOf(phases: number): string {
  return ['A', 'B', 'C'].filter((_, phase) => phases & (1 << phase)).join('') || 'none';
}
