import { formatNumber } from '../format.ts';
import type { VoltageCaseName, VoltageProfile } from '../schemas/voltage-profile.ts';
import type { Series } from './chart.ts';
import { chartSize, drawAxes, drawSeries, plainAxis } from './chart.ts';
import type { Drawing, Mark } from './drawing.ts';
import { hatch, line, text } from './drawing.ts';

/* Voltage along the way as a load flow gives it; outside the range it must keep the field is hatched. */

const caseWords: Record<VoltageCaseName, { name: string; look: Series['look'] }> = {
  'minimum-before': { name: 'min. load before', look: 'dashed' },
  'minimum-after': { name: 'min. load after', look: 'copper-dashed' },
  'peak-before': { name: 'peak before', look: 'ink' },
  'peak-after': { name: 'peak after', look: 'copper' },
};

/** Of the phases that are there, the one furthest from nominal. */
function furthest(voltages: readonly (number | null)[]): number | undefined {
  return voltages
    .filter((each) => each !== null)
    .reduce<number | undefined>(
      (p, q) => (p !== undefined && Math.abs(p - 1) >= Math.abs(q - 1) ? p : q),
      undefined,
    );
}

export function drawVoltageProfile({
  cases,
  regulators,
  lowPu,
  highPu,
  operatingCase,
}: VoltageProfile): Drawing {
  const { width, height, left, right, top, bottom } = chartSize;
  const series = cases.map(({ name, points }): Series => ({
    ...caseWords[name],
    points: points.flatMap(({ km, voltagePu }) => {
      const volts = furthest(voltagePu);
      return volts === undefined ? [] : [[km, volts] as const];
    }),
  }));
  const all = series.flatMap(({ points }) => points);
  const volts = all.map(([, pu]) => pu);
  const x = plainAxis(0, all.reduce((most, [km]) => Math.max(most, km), 0) || 1, left, width - right);
  const y = plainAxis(
    volts.reduce((least, each) => Math.min(least, each), lowPu - 0.01),
    volts.reduce((most, each) => Math.max(most, each), highPu + 0.01),
    height - bottom,
    top,
  );
  const [high, low] = [y.place(highPu), y.place(lowPu)];
  const marks: Mark[] = [
    ...hatch(left, top, width - right - left, high - top),
    ...hatch(left, low, width - right - left, height - bottom - low),
    ...drawAxes(x, y, { x: 'km from the source', y: 'voltage, of nominal' }),
    line(left, high, width - right, high, 'heavy'),
    line(left, low, width - right, low, 'heavy'),
    ...drawSeries(x, y, series),
    ...regulators.flatMap(({ id, km }, index) => [
      line(x.place(km), top, x.place(km), height - bottom, 'dotted'),
      // Below the hatched field, one under the other where they stand close.
      text(x.place(km) + 4, high + 15 + (index % 4) * 13, id, 'soft'),
    ]),
  ];
  const points = cases[0]?.points ?? [];
  const scenario = operatingCase === '' ? '' : ` (${operatingCase})`;
  return {
    title: `Voltage along the way${scenario}`,
    description: `The phase furthest from nominal at each place; it must stay between ${lowPu} and ${highPu} of nominal.`,
    width,
    height,
    marks,
    table: {
      columns: [
        { label: 'Place', isFigure: false },
        { label: 'km', isFigure: true },
        ...cases.map(({ name }) => ({ label: `${caseWords[name].name}, of nominal`, isFigure: true })),
      ],
      rows: points.map(({ node, km }, index) => [
        node,
        formatNumber(km, 3),
        ...cases.map((each) => {
          const value = furthest(each.points[index]?.voltagePu ?? []);
          return value === undefined ? 'Not evaluated' : formatNumber(value, 4);
        }),
      ]),
    },
  };
}
