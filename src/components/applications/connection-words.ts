import type { WindingConnection } from '../../../shared/schemas/answers.ts';

/** Winding connections as an applicant can check them against the nameplate. */
export const connectionWords: Record<WindingConnection, string> = {
  YNyn0: 'YNyn0: grounded wye – grounded wye',
  YNd1: 'YNd1: grounded wye (utility) – delta (site)',
  Dyn1: 'Dyn1: delta (utility) – grounded wye (site)',
  Dd0: 'Dd0: delta – delta',
  YNy0: 'YNy0: grounded wye (utility) – wye (site)',
  Yyn0: 'Yyn0: wye (utility) – grounded wye (site)',
  Yd1: 'Yd1: wye (utility) – delta (site)',
  Dy1: 'Dy1: delta (utility) – wye (site)',
};
