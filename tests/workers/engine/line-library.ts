import type {
  BareConductor,
  Cable,
  Conductor,
  Construction,
  Impedance,
  Place,
} from '../../../shared/schemas/study.ts';
import { kmPerMile } from '../../../workers/engine/line-units.ts';
import { readJson } from './cases.ts';

/* fixtures/conductors as a study file takes it: in US units, as its sources are. */

type Confirmed = { confirmed: boolean; confirmedBy?: string[] };

type UsConductor = Extract<BareConductor, { ohmPerMile: number }>;

type ListedConductor = Confirmed & { id: string; ampacityA: number | null } & UsConductor;

type ListedCable = Confirmed & { id: string; core: string } & (
    | { kind: 'concentric'; strands: number; strand: string; outsideDiameterIn: number }
    | { kind: 'tape'; shieldDiameterIn: number; tapeThicknessMil: number }
  );

/** A row of a test feeder's table: what hangs in a spacing, and the matrix that the table gives for it. */
export type Configuration = {
  id: string;
  phasing: string;
  spacing: string;
  conductor?: string;
  cable?: string;
  neutral?: string;
  phases: string;
  zOhmPerMile: [r: number, x: number][][];
  toleranceOhmPerMile: number;
};

type Configurations = {
  spacings: Record<string, [xFt: number, yFt: number][]>;
  configurations: Configuration[];
  transposed: { values: Record<string, Record<'z1' | 'z0', [r: number, x: number]>> };
};

export const listedConductors = (
  readJson('conductors', 'conductors.json') as { conductors: ListedConductor[] }
).conductors;
export const listedCables = (readJson('conductors', 'cables.json') as { cables: ListedCable[] }).cables;
export const { configurations, spacings, transposed } = readJson(
  'conductors',
  'configurations.json',
) as Configurations;

function bare(id: string): UsConductor {
  const { ohmPerMile, gmrFt, diameterIn } = listedConductors.find((conductor) => conductor.id === id)!;
  return { ohmPerMile, gmrFt, diameterIn };
}

export const conductors: Conductor[] = listedConductors.map(({ id }) => ({ id, ...bare(id) }));

export const cables: Cable[] = listedCables.map((cable) => {
  const { id } = cable;
  const core = bare(cable.core);
  if (cable.kind === 'tape') {
    const { kind, shieldDiameterIn, tapeThicknessMil } = cable;
    return { id, kind, core, shieldDiameterIn, tapeThicknessMil };
  }
  const { kind, strands, outsideDiameterIn } = cable;
  return { id, kind, core, strands, strand: bare(cable.strand), outsideDiameterIn };
});

/** Hangs a configuration's conductors into its spacing, in the order of its phasing string. */
export function constructionOf(configuration: Configuration): Construction {
  const { id, phasing, spacing, conductor, cable, neutral } = configuration;
  const places = [...phasing].map((phase, index): Place => {
    const [xFt, yFt] = spacings[spacing]![index]!;
    const where = { phase: phase as Place['phase'], xFt, yFt };
    if (phase === 'N') return { ...where, conductor: neutral! };
    return cable === undefined ? { ...where, conductor: conductor! } : { ...where, cable };
  });
  return { id, earthOhmM: 100, places };
}

/** Ohms per km as the pair [r, x] in ohms per mile, as the tables have it. */
export function perMile({ r, x }: Impedance): [r: number, x: number] {
  return [r * kmPerMile, x * kmPerMile];
}
