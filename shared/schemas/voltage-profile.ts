/*
 * Voltage from the substation to the point of interconnection, as a load flow gives it: what the profile on the working
 * sheet is drawn from. Plain numbers, nothing of the engine.
 */

/** Load and project of a flow; all generation that there is runs at full export. */
export type VoltageCaseName = 'minimum-before' | 'minimum-after' | 'peak-before' | 'peak-after';

export type VoltageProfilePoint = {
  node: string;
  /** Along the lines from the first point. */
  km: number;
  /** Over nominal, of phases A, B, C; null of a phase that is not there. */
  voltagePu: [a: number | null, b: number | null, c: number | null];
};

export type VoltageProfile = {
  /** The operating case, "" for the model as it stands. */
  operatingCase: string;
  /** By rising distance, the last is the point of interconnection; those of one list belong to those of the others. */
  cases: { name: VoltageCaseName; points: VoltageProfilePoint[] }[];
  /** Regulators and where they stand on the way. */
  regulators: { id: string; km: number }[];
  /** The range that the nodes of this voltage must keep, over nominal. */
  lowPu: number;
  highPu: number;
};
