import type { CircuitPlan, Stretch } from './circuits.ts';
import { at, placeAt, type Point } from './plane.ts';
import { makeDice, type Dice } from './random.ts';
import { lengthKm, type Road } from './road.ts';

export interface Pole {
  id: string;
  point: Point;
  phases: string;
  /** Index of the pole on the source's side; null for the first one out of the substation. */
  parent: number | null;
  spanKm: number;
  carries: Stretch['carries'];
  /** The first pole of a lateral or of a branch lane: a fuse may stand on its span. */
  isHead: boolean;
  recloser: string | null;
  street: string;
}

export interface StrungCircuit {
  plan: CircuitPlan;
  poles: Pole[];
  /** Index of the pole that stands at a junction. */
  atJunction: Map<string, number>;
}

/** Poles stand a few steps beside the road. */
const besideKm: Point = [0.009, 0.012];
const substationExitKm = 0.15;

interface Run {
  road: Road;
  fromKm: number;
  toKm: number;
  parent: number | null;
  phases: string;
  carries: Stretch['carries'];
  isTap: boolean;
  recloser: string | null;
}

interface Stop {
  km: number;
  junction: string | null;
  lanes: Road[];
}

interface Crew {
  strung: StrungCircuit;
  lanesByHost: Map<string, Road[]>;
  dice: Dice;
  /** Kilometres strung on each phase, so that laterals take the least used one. */
  phaseKm: Record<string, number>;
}

function standBeside(point: Point, plan: CircuitPlan): Point {
  return [point[0] + plan.side * besideKm[0], point[1] + plan.side * besideKm[1]];
}

/** Junctions and lanes want a pole of their own; the others fill the gaps at about the plan's spacing. */
function listStops(run: Run, crew: Crew): Stop[] {
  const [low, high] = [Math.min(run.fromKm, run.toKm), Math.max(run.fromKm, run.toKm)];
  const between = (km: number) => km > low + 0.02 && km < high - 0.02;
  const fixed: Stop[] = [...run.road.marks].flatMap(([junction, km]) =>
    between(km) ? [{ km, junction, lanes: [] }] : [],
  );
  for (const lane of crew.lanesByHost.get(run.road.name) ?? []) {
    const km = lane.host?.atKm ?? 0;
    const near = fixed.find((stop) => Math.abs(stop.km - km) < 0.03);
    if (near) near.lanes.push(lane);
    else if (between(km)) fixed.push({ km, junction: null, lanes: [lane] });
  }
  const forward = run.toKm > run.fromKm ? 1 : -1;
  const ends = [...fixed, { km: run.toKm, junction: null, lanes: [] }].sort(
    (a, b) => forward * (a.km - b.km),
  );
  const stops: Stop[] = [];
  let last = run.fromKm;
  for (const end of ends) {
    const gaps = Math.max(1, Math.round(Math.abs(end.km - last) / crew.strung.plan.spacingKm));
    for (let i = 1; i < gaps; i += 1)
      stops.push({ km: last + ((end.km - last) * i) / gaps, junction: null, lanes: [] });
    stops.push(end);
    last = end.km;
  }
  return stops;
}

function string(run: Run, crew: Crew): { lane: Road; pole: number }[] {
  const { poles, atJunction, plan } = crew.strung;
  const taps: { lane: Road; pole: number }[] = [];
  let parent = run.parent;
  let lastKm = run.fromKm;
  listStops(run, crew).forEach((stop, i) => {
    const { point } = placeAt(run.road.line, run.road.stations, stop.km);
    const spanKm = Math.max(0.01, Math.abs(stop.km - lastKm));
    poles.push({
      id: `${plan.code}-${String(poles.length + 1).padStart(3, '0')}`,
      point: standBeside(point, plan),
      phases: run.phases,
      parent,
      spanKm,
      carries: run.carries,
      isHead: i === 0 && run.isTap,
      recloser: i === 0 ? run.recloser : null,
      street: run.road.name,
    });
    for (const phase of run.phases) crew.phaseKm[phase] = (crew.phaseKm[phase] ?? 0) + spanKm;
    parent = poles.length - 1;
    lastKm = stop.km;
    if (stop.junction !== null) atJunction.set(stop.junction, parent);
    for (const lane of stop.lanes) taps.push({ lane, pole: parent });
  });
  return taps;
}

function lightestPhase(crew: Crew, among: string): string {
  return [...among].sort((a, b) => (crew.phaseKm[a] ?? 0) - (crew.phaseKm[b] ?? 0))[0] ?? 'A';
}

/** Long lanes have farms and workshops with motors and get all phases, some get two, most get one. */
function choosePhases(lane: Road, parentPhases: string, crew: Crew): string {
  const long = lengthKm(lane);
  if (parentPhases === 'ABC' && long > 1.15 && crew.dice.chance(0.4)) return 'ABC';
  if (parentPhases.length > 1 && long > 0.85 && crew.dice.chance(0.35)) {
    const first = lightestPhase(crew, parentPhases);
    const second = lightestPhase(crew, parentPhases.replace(first, ''));
    return [first, second].sort().join('');
  }
  return lightestPhase(crew, parentPhases);
}

function runOfStretch(stretch: Stretch, crew: Crew, roads: ReadonlyMap<string, Road>): Run {
  const road = roads.get(stretch.road);
  const [fromKm, endKm] = [road?.marks.get(stretch.from), road?.marks.get(stretch.to)];
  if (!road || fromKm === undefined || endKm === undefined) {
    throw new Error(
      `got a stretch of ${stretch.road} from ${stretch.from} to ${stretch.to}, expected both on that road`,
    );
  }
  const toKm = endKm - Math.sign(endKm - fromKm) * (stretch.stopShortKm ?? 0);
  const { poles, atJunction } = crew.strung;
  const parent = atJunction.get(stretch.from) ?? null;
  const parentPhases = parent === null ? 'ABC' : at(poles, parent).phases;
  const phases = stretch.carries === 'lateral' ? lightestPhase(crew, parentPhases) : 'ABC';
  const isTap = stretch.carries === 'lateral';
  return {
    road,
    fromKm,
    toKm,
    parent,
    phases,
    carries: stretch.carries,
    isTap,
    recloser: stretch.recloser ?? null,
  };
}

/** The first pole, on the road in front of the substation: everything else hangs from it. */
function raiseExitPole(crew: Crew, roads: ReadonlyMap<string, Road>): void {
  const { plan, poles, atJunction } = crew.strung;
  const first = at(plan.stretches, 0);
  const run = runOfStretch(first, crew, roads);
  const { point } = placeAt(run.road.line, run.road.stations, run.fromKm);
  poles.push({
    id: `${plan.code}-001`,
    point: standBeside(point, plan),
    phases: 'ABC',
    parent: null,
    spanKm: substationExitKm,
    carries: 'mainline',
    isHead: false,
    recloser: null,
    street: run.road.name,
  });
  atJunction.set(first.from, 0);
}

/** Walks the plan's stretches pole by pole, then every lane that turns off them, then the byways. */
export function stringCircuit(plan: CircuitPlan, roads: readonly Road[], taken: Set<string>): StrungCircuit {
  const strung: StrungCircuit = { plan, poles: [], atJunction: new Map() };
  const byName = new Map(roads.map((road) => [road.name, road]));
  const lanesByHost = new Map<string, Road[]>();
  for (const road of roads) {
    if (road.host === null || taken.has(road.name)) continue;
    lanesByHost.set(road.host.road, [...(lanesByHost.get(road.host.road) ?? []), road]);
  }
  const crew: Crew = { strung, lanesByHost, dice: makeDice(plan.seed), phaseKm: {} };
  raiseExitPole(crew, byName);
  const queue = plan.stretches.flatMap((stretch) => {
    const taps = string(runOfStretch(stretch, crew, byName), crew);
    const end = strung.poles.length - 1;
    if (!strung.atJunction.has(stretch.to)) strung.atJunction.set(stretch.to, end);
    return taps;
  });
  for (const { lane, pole } of queue) {
    if (taken.has(lane.name) || crew.dice.chance(0.06)) continue;
    taken.add(lane.name);
    const phases = choosePhases(lane, at(strung.poles, pole).phases, crew);
    const carries = phases === 'ABC' ? 'branch' : 'lateral';
    const run: Run = {
      road: lane,
      fromKm: 0,
      toKm: lengthKm(lane),
      parent: pole,
      phases,
      carries,
      isTap: true,
      recloser: null,
    };
    queue.push(...string(run, crew));
  }
  return strung;
}
