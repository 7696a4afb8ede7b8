import { crossings } from './crossings.ts';
import type { Point } from './plane.ts';
import { drawRoad, type Road } from './road.ts';
import { isWet, type Water } from './water.ts';

/** Streets across the slope (rows) and down it (columns) of the town of Marrowbank. */
export const townRows = [
  'Tanyard Street',
  'Chandler Street',
  'Weir Street',
  'Market Street',
  'Cooper Street',
  'Saltmarket',
  'Lantern Street',
  'Hillgate',
] as const;
export const townColumns = [
  'Quayside',
  'Ropewalk',
  'Fuller Street',
  'High Street',
  'Abbot Street',
  'Orchard Street',
  'Eastwall',
] as const;
export const highStreetColumn = 3;
export const marketStreetRow = 3;

const blockKm = { across: 0.3, down: 0.29 };
const heart: Point = [0.3, -1.12];
const turn = (-14 * Math.PI) / 180;

/** Junction of a row and a column; the grid leans and bends, as old towns do. */
function townCorner(column: number, row: number): Point {
  const u = (column - highStreetColumn) * blockKm.across;
  const v = (row - marketStreetRow) * blockKm.down;
  const bentU = u + 0.12 * Math.sin(1.9 * v + 0.4);
  const bentV = v + 0.1 * Math.sin(1.6 * u - 0.7) - 0.05 * u * v;
  return [
    heart[0] + bentU * Math.cos(turn) - bentV * Math.sin(turn),
    heart[1] + bentU * Math.sin(turn) + bentV * Math.cos(turn),
  ];
}

export function townCornerName(column: number, row: number): string {
  return `${townColumns[column]} and ${townRows[row]}`;
}

/** The town thins out towards its edges and stops at the river. */
export function isTownCorner(column: number, row: number, water: Water): boolean {
  if (townColumns[column] === undefined || townRows[row] === undefined) return false;
  const fromMiddle = Math.hypot((column - 3) / 3.4, (row - 3.3) / 4.4);
  return fromMiddle <= 1 && !isWet(water, townCorner(column, row), 0.03);
}

type Stop = { name: string | null; point: Point };

export function makeTownStreets(water: Water): Road[] {
  const corner = (column: number, row: number): Stop => ({
    name: townCornerName(column, row),
    point: townCorner(column, row),
  });
  const rows = townRows.map((name, row) => {
    const stops = townColumns
      .map((_, column) => column)
      .filter((column) => isTownCorner(column, row, water))
      .map((column) => corner(column, row));
    if (row === marketStreetRow) stops.push({ name: 'East Gate', point: crossings['East Gate'] });
    return drawRoad(name, 'lane', stops);
  });
  const columns = townColumns.map((name, column) => {
    const stops = townRows
      .map((_, row) => row)
      .filter((row) => isTownCorner(column, row, water))
      .map((row) => corner(column, row));
    if (column === highStreetColumn) {
      stops.unshift({ name: 'South Gate', point: crossings['South Gate'] });
      stops.push({ name: 'North Gate', point: crossings['North Gate'] });
    }
    return drawRoad(name, column === highStreetColumn ? 'road' : 'lane', stops);
  });
  return [...rows, ...columns];
}
