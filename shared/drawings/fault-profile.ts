import { formatNumber } from '../format.ts';
import type { SheetPlace } from '../schemas/sheets.ts';
import { chartSize, drawAxes, drawSeries, plainAxis } from './chart.ts';
import type { Drawing } from './drawing.ts';

/* Fault currents along the way, from the first place at the voltage of the point of interconnection. */

export function drawFaultProfile(places: readonly SheetPlace[]): Drawing {
  const { kv } = places.at(-1)!;
  const shown = places.filter((place) => place.kv === kv);
  const { width, height, left, right, top, bottom } = chartSize;
  const start = shown[0]!.km;
  const km = (place: SheetPlace) => place.km - start;
  const currents = shown.flatMap(({ threePhaseA, lineGroundA }) =>
    [threePhaseA.before, threePhaseA.after, lineGroundA.before, lineGroundA.after].filter(
      (each) => each !== null,
    ),
  );
  const x = plainAxis(0, km(shown.at(-1)!) || 1, left, width - right);
  const y = plainAxis(
    0,
    currents.reduce((most, each) => Math.max(most, each), 1),
    height - bottom,
    top,
  );
  const series = (kind: 'threePhaseA' | 'lineGroundA', state: 'before' | 'after') =>
    shown.flatMap((place) => {
      const amps = place[kind][state];
      return amps === null ? [] : [[km(place), amps] as const];
    });
  const marks = [
    ...drawAxes(x, y, { x: `km from ${shown[0]!.node}`, y: 'fault current, A' }),
    ...drawSeries(x, y, [
      { name: '3-phase after', look: 'copper', points: series('threePhaseA', 'after') },
      { name: '3-phase before', look: 'ink', points: series('threePhaseA', 'before') },
      { name: '1-line after', look: 'copper-dashed', points: series('lineGroundA', 'after') },
      { name: '1-line before', look: 'dashed', points: series('lineGroundA', 'before') },
    ]),
  ];
  const amps = (value: number | null) => (value === null ? 'Not evaluated' : formatNumber(value, 1));
  return {
    title: `Fault currents along the way at ${kv} kV, before and with the project`,
    description: `Bolted faults at ${shown.length} places from ${shown[0]!.node} to the point of interconnection.`,
    width,
    height,
    marks,
    table: {
      columns: [
        { label: 'Place', isFigure: false },
        { label: 'km', isFigure: true },
        { label: 'Three-phase before, A', isFigure: true },
        { label: 'Three-phase after, A', isFigure: true },
        { label: 'Line to ground before, A', isFigure: true },
        { label: 'Line to ground after, A', isFigure: true },
      ],
      rows: shown.map((place) => [
        place.node,
        formatNumber(km(place), 3),
        amps(place.threePhaseA.before),
        amps(place.threePhaseA.after),
        amps(place.lineGroundA.before),
        amps(place.lineGroundA.after),
      ]),
    },
  };
}
