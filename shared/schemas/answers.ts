import { Type, type Static } from '@sinclair/typebox';
import { manyLines, oneLine } from './text.ts';
import { InverterNameplate, MachineNameplate, TransformerNameplate } from './equipment.ts';

/** Each part of the application form is saved by itself; `papers` may be empty, everything else is asked. */
export const answerSections = ['project', 'site', 'equipment', 'connection', 'papers'] as const;
export type AnswerSection = (typeof answerSections)[number];

const text = (words: string, maxLength: number) =>
  oneLine(`${words}, in ${maxLength} characters or fewer`, maxLength);

export const ProjectAnswers = Type.Object(
  {
    name: text('Enter a name for the project', 120),
    contactName: text('Enter the name of the person we should write to', 120),
    contactEmail: Type.String({
      format: 'email',
      maxLength: 254,
      errorMessage: 'Enter an e-mail address in the form name@example.org',
    }),
    description: Type.Optional(manyLines('Description must be 2,000 characters or fewer', 2000)),
  },
  { additionalProperties: false },
);
export type ProjectAnswers = Static<typeof ProjectAnswers>;

export const SiteAnswers = Type.Object(
  {
    lat: Type.Number({ minimum: -90, maximum: 90, errorMessage: 'Put the project on the map' }),
    lng: Type.Number({
      minimum: -180,
      maximum: 180,
      errorMessage: 'Put the project on the map',
      askedWith: 'lat',
    }),
    address: Type.Optional(oneLine('Address must be 200 characters or fewer', 200)),
  },
  { additionalProperties: false },
);
export type SiteAnswers = Static<typeof SiteAnswers>;

const count = Type.Integer({
  minimum: 1,
  maximum: 500,
  errorMessage: 'Number of units must be between 1 and 500',
});

/** A group of equal units: chosen from the records, or typed from the nameplate. */
export const EquipmentUnit = Type.Union([
  Type.Object(
    {
      source: Type.Literal('record'),
      equipmentId: Type.String({
        minLength: 1,
        maxLength: 64,
        errorMessage: 'Choose a model from the records',
      }),
      count,
    },
    { additionalProperties: false },
  ),
  Type.Object(
    {
      source: Type.Literal('nameplate'),
      kind: Type.Union([Type.Literal('pv-inverter'), Type.Literal('battery-inverter')], {
        errorMessage: 'Choose the kind of equipment',
      }),
      nameplate: InverterNameplate,
      count,
    },
    { additionalProperties: false },
  ),
  Type.Object(
    {
      source: Type.Literal('nameplate'),
      kind: Type.Union([Type.Literal('synchronous-machine'), Type.Literal('induction-machine')], {
        errorMessage: 'Choose the kind of equipment',
      }),
      nameplate: MachineNameplate,
      count,
    },
    { additionalProperties: false },
  ),
]);
export type EquipmentUnit = Static<typeof EquipmentUnit>;

export const EquipmentAnswers = Type.Object(
  {
    units: Type.Array(EquipmentUnit, {
      minItems: 1,
      maxItems: 20,
      errorMessage: {
        minItems: 'Add at least one generating unit',
        maxItems: 'Add 20 groups of units or fewer',
      },
    }),
    exportKw: Type.Optional(
      Type.Number({
        minimum: 0,
        maximum: 40_000,
        errorMessage: 'Export limit must be between 0 and 40,000 kilowatts',
      }),
    ),
  },
  { additionalProperties: false },
);
export type EquipmentAnswers = Static<typeof EquipmentAnswers>;

/** First letters: the utility side; the clock hour is the lag of the site side in steps of 30°. */
export const windingConnections = ['YNyn0', 'YNd1', 'Dyn1', 'Dd0', 'YNy0', 'Yyn0', 'Yd1', 'Dy1'] as const;
export type WindingConnection = (typeof windingConnections)[number];

export const Neutral = Type.Union(
  [
    Type.Object({ kind: Type.Literal('solid') }, { additionalProperties: false }),
    Type.Object({ kind: Type.Literal('ungrounded') }, { additionalProperties: false }),
    Type.Object(
      {
        kind: Type.Literal('impedance'),
        rOhm: Type.Number({
          minimum: 0,
          maximum: 10_000,
          errorMessage: 'Resistance must be 0 to 10,000 ohms',
        }),
        xOhm: Type.Number({
          minimum: 0,
          maximum: 10_000,
          errorMessage: 'Reactance must be 0 to 10,000 ohms',
        }),
      },
      { additionalProperties: false },
    ),
  ],
  { errorMessage: 'Say how the neutral is grounded' },
);

export const ConnectionAnswers = Type.Object(
  {
    phases: Type.Union([Type.Literal('ABC'), Type.Literal('one')], {
      errorMessage: 'Choose three-phase or one-phase',
    }),
    /** Absent: the units connect without a transformer of their own (always so for one-phase projects). */
    transformer: Type.Optional(
      Type.Object(
        {
          rating: Type.Union([
            Type.Object(
              {
                source: Type.Literal('record'),
                equipmentId: Type.String({
                  minLength: 1,
                  maxLength: 64,
                  errorMessage: 'Choose a transformer from the records',
                }),
              },
              { additionalProperties: false },
            ),
            Type.Object(
              { source: Type.Literal('nameplate'), nameplate: TransformerNameplate },
              { additionalProperties: false },
            ),
          ]),
          windings: Type.Union(
            windingConnections.map((connection) => Type.Literal(connection)),
            { errorMessage: 'Choose how the windings are connected' },
          ),
          /** How the utility-side neutral is grounded, where the winding brings one out. */
          utilityNeutral: Neutral,
          /** The same on the site side. */
          siteNeutral: Neutral,
        },
        { additionalProperties: false },
      ),
    ),
    /** Interrupting rating of the customer's main panel, where it has one. */
    panelInterruptingKa: Type.Optional(
      Type.Number({
        minimum: 1,
        maximum: 200,
        errorMessage: 'Interrupting rating of the main panel must be between 1 and 200 kiloamperes',
      }),
    ),
    /** How the star points of rotating machines are grounded; asked only where there are machines. */
    machineNeutral: Type.Optional(Neutral),
  },
  { additionalProperties: false },
);
export type ConnectionAnswers = Static<typeof ConnectionAnswers>;
export type Neutral = Static<typeof Neutral>;

export const paperPurposes = [
  'one-line-diagram',
  'site-plan',
  'equipment-sheet',
  'listing-certificate',
  'site-control',
  'other',
] as const;
export type PaperPurpose = (typeof paperPurposes)[number];

export const PapersAnswers = Type.Object(
  {
    files: Type.Array(
      Type.Object(
        {
          fileId: Type.String({ minLength: 1, maxLength: 64, errorMessage: 'Upload the file again' }),
          purpose: Type.Union(
            paperPurposes.map((purpose) => Type.Literal(purpose)),
            { errorMessage: 'Say what the file shows' },
          ),
        },
        { additionalProperties: false },
      ),
      { maxItems: 30, errorMessage: 'Attach 30 files or fewer' },
    ),
  },
  { additionalProperties: false },
);
export type PapersAnswers = Static<typeof PapersAnswers>;

export const sectionSchemas = {
  project: ProjectAnswers,
  site: SiteAnswers,
  equipment: EquipmentAnswers,
  connection: ConnectionAnswers,
  papers: PapersAnswers,
} as const;

export interface Answers {
  project?: ProjectAnswers;
  site?: SiteAnswers;
  equipment?: EquipmentAnswers;
  connection?: ConnectionAnswers;
  papers?: PapersAnswers;
}

export type CompleteAnswers = Required<Answers>;
