import { formatNumber } from '../format.ts';
import type { CoordinatedDevice, Coordination, CoordinationElement } from '../schemas/coordination.ts';
import type { Series } from './chart.ts';
import { chartSize, drawAxes, drawSeries, powerAxis } from './chart.ts';
import type { Drawing, Look, Mark } from './drawing.ts';
import { line, text } from './drawing.ts';

/* Tripping time against current, both in powers of ten, of the devices of one voltage on the way. */

const seriesLooks: readonly Look[] = ['ink', 'copper', 'verdigris', 'dashed', 'copper-dashed', 'dotted'];

type Plotted = { device: CoordinatedDevice; name: string; points: readonly (readonly [number, number])[] };

/** Nothing where no device of the element has a curve. */
export function drawTimeCurrent(
  coordination: Coordination,
  element: CoordinationElement,
): Drawing | undefined {
  const plotted = listPlotted(coordination, element);
  const points = plotted.flatMap((each) => each.points).filter(([amps, seconds]) => amps > 0 && seconds > 0);
  if (points.length === 0) return undefined;
  const { width, height, left, right, top, bottom } = chartSize;
  const amps = points.map((point) => point[0]);
  const seconds = points.map((point) => point[1]);
  const x = powerAxis(Math.min(...amps), Math.max(...amps), left, width - right);
  const y = powerAxis(Math.max(0.01, Math.min(...seconds)), Math.max(...seconds), height - bottom, top);
  const series = plotted.map(({ name, points: own }, index): Series => ({
    name,
    look: seriesLooks[index % seriesLooks.length]!,
    points: own.filter(([a, s]) => a > 0 && s >= y.from && s <= y.to),
  }));
  const faults = listFaults(plotted, element).filter(({ at }) => at >= x.from && at <= x.to);
  const marks: Mark[] = [
    ...drawAxes(x, y, { x: 'current in the device, A', y: 'tripping time, s' }),
    ...drawFaults(faults, x.place, height - bottom),
    ...drawSeries(x, y, series),
  ];
  return {
    title: `Tripping time against current, ${element} elements`,
    description: `${plotted.length} curves; upright lines are currents of bolted faults with the project.`,
    width,
    height,
    marks,
    table: tabulate(coordination, element),
  };
}

function listPlotted({ devices }: Coordination, element: CoordinationElement): Plotted[] {
  return devices.flatMap((device) => {
    const curve = element === 'phase' ? device.phaseCurve : device.groundCurve;
    return (curve?.lines ?? []).map(({ name, points }) => ({
      device,
      name: name === 'operating' ? device.id : `${device.id} ${name}`,
      points,
    }));
  });
}

/** From left to right each begins below the words of the one before, so that no line runs through words. */
function drawFaults(
  faults: readonly { at: number; words: string }[],
  place: (amps: number) => number,
  foot: number,
): Mark[] {
  const ordered = [...faults].sort((p, q) => p.at - q.at);
  return ordered.flatMap(({ at, words }, index) => {
    const head = chartSize.top + (index % 6) * 14;
    return [line(place(at), head, place(at), foot, 'dotted'), text(place(at) + 4, head + 11, words, 'soft')];
  });
}

/** The far-end fault of each device once, with the project. */
function listFaults(plotted: readonly Plotted[], element: CoordinationElement) {
  const devices = new Set(plotted.map(({ device }) => device));
  return [...devices].flatMap(({ id, faults }) =>
    faults
      .filter((fault) => fault.element === element && fault.end === 'far' && fault.after.amps > 0)
      .map(({ after }) => ({ at: after.amps, words: `end of ${id}` })),
  );
}

function tabulate({ devices }: Coordination, element: CoordinationElement): Drawing['table'] {
  const time = (seconds: number | null) => (seconds === null ? 'does not trip' : formatNumber(seconds, 3));
  return {
    columns: [
      { label: 'Device', isFigure: false },
      { label: 'Curve', isFigure: false },
      { label: 'Fault', isFigure: false },
      { label: 'Before, A', isFigure: true },
      { label: 'Before, s', isFigure: true },
      { label: 'After, A', isFigure: true },
      { label: 'After, s', isFigure: true },
    ],
    rows: devices.flatMap(({ id, phaseCurve, groundCurve, faults }) => {
      const curve = element === 'phase' ? phaseCurve : groundCurve;
      return faults
        .filter((fault) => fault.element === element)
        .map(({ end, node, before, after }) => [
          id,
          curve?.words ?? 'not given',
          `${end} end, ${node}`,
          formatNumber(before.amps, 1),
          time(before.seconds),
          formatNumber(after.amps, 1),
          time(after.seconds),
        ]);
    }),
  };
}
