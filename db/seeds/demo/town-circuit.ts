import type { CircuitPlan, Stretch } from './circuits.ts';
import {
  highStreetColumn,
  isTownCorner,
  marketStreetRow,
  townColumns,
  townCornerName,
  townRows,
} from './town.ts';
import type { Water } from './water.ts';

const branchRows = [1, 5];

/** From the corner as far as the street goes in steps of one block. */
function lastCorner(isThere: (n: number) => boolean, from: number, step: 1 | -1): number {
  let last = from;
  while (isThere(last + step)) last += step;
  return last;
}

function alongRow(row: number, carries: Stretch['carries'], water: Water): Stretch[] {
  return ([-1, 1] as const).flatMap((step) => {
    const end = lastCorner((column) => isTownCorner(column, row, water), highStreetColumn, step);
    if (end === highStreetColumn) return [];
    const from = townCornerName(highStreetColumn, row);
    return [{ road: townRows[row]!, from, to: townCornerName(end, row), carries }];
  });
}

/** One block up and one block down each street from a three-phase row, stopping before the next row's line. */
function stubs(row: number, water: Water): Stretch[] {
  const columns = townColumns.map((_, column) => column).filter((column) => column !== highStreetColumn);
  return columns.flatMap((column) =>
    ([-1, 1] as const).flatMap((step): Stretch[] => {
      if (!isTownCorner(column, row, water) || !isTownCorner(column, row + step, water)) return [];
      const [from, to] = [townCornerName(column, row), townCornerName(column, row + step)];
      return [{ road: townColumns[column]!, from, to, carries: 'lateral', stopShortKm: 0.06 }];
    }),
  );
}

/** The town's 4.16 kV feeder: in along Market Street, up and down High Street, three-phase on two more streets. */
export function planTownCircuit(water: Water): CircuitPlan {
  const quay = lastCorner((column) => isTownCorner(column, marketStreetRow, water), highStreetColumn, -1);
  const market = townCornerName(highStreetColumn, marketStreetRow);
  const top = lastCorner((row) => isTownCorner(highStreetColumn, row, water), marketStreetRow, 1);
  const bottom = lastCorner((row) => isTownCorner(highStreetColumn, row, water), marketStreetRow, -1);
  const otherRows = townRows
    .map((_, row) => row)
    .filter((row) => row !== marketStreetRow && !branchRows.includes(row));
  return {
    code: 'MB1',
    spacingKm: 0.12,
    peakKw: 2600,
    seed: 4161,
    side: 1,
    stretches: [
      { road: 'Market Street', from: townCornerName(quay, marketStreetRow), to: market, carries: 'mainline' },
      { road: 'Market Street', from: market, to: 'East Gate', carries: 'mainline' },
      {
        road: 'High Street',
        from: market,
        to: townCornerName(highStreetColumn, top),
        carries: 'mainline',
        recloser: 'MB1-R1',
      },
      {
        road: 'High Street',
        from: market,
        to: townCornerName(highStreetColumn, bottom),
        carries: 'mainline',
      },
      ...branchRows.flatMap((row) => alongRow(row, 'branch', water)),
      ...otherRows.flatMap((row) => alongRow(row, 'lateral', water)),
      ...[...branchRows, marketStreetRow].flatMap((row) => stubs(row, water)),
    ],
  };
}
