import { Type, type Static, type TOptional } from '@sinclair/typebox';
import { clockKinds, type ClockKindKey } from '../rules/clock-kinds.ts';
import { questions, type QuestionId } from './findings.ts';
import { setAsideRoles } from './rule-sets.ts';
import { oneLine } from './text.ts';

/* What an administrator sends while writing a draft: the parts of one page, each rule whole. */

const closed = { additionalProperties: false } as const;

function oneOf<const T extends string>(choices: readonly T[], words: string) {
  return Type.Union(
    choices.map((choice) => Type.Literal(choice)),
    { errorMessage: words },
  );
}

const version = Type.Integer({ minimum: 1, errorMessage: 'Load the page again' });
const source = oneLine('Name the clause, in 400 characters or fewer', 400);
const readOrMemory = oneOf(['read', 'memory'], 'Say whether the clause was read or is remembered');
const cents = Type.Integer({
  minimum: 0,
  maximum: 1_000_000_000,
  errorMessage: 'Enter the amount as dollars and cents, 0 or more',
});

const LimitEdit = Type.Object(
  {
    limit: Type.Union([Type.Number({ minimum: 0 }), Type.Null()], {
      errorMessage: 'Enter the limit as a number of 0 or more',
    }),
    comparison: oneOf(['<=', '<', '>='], 'Choose how the value is compared'),
    consequence: oneOf(['supplemental', 'study', 'note', 'none'], 'Choose what follows'),
  },
  closed,
);

export const RuleEdit = Type.Object(
  {
    asked: Type.Boolean({ errorMessage: 'Say whether the question is asked' }),
    stage: oneOf(['initial-review', 'supplemental-review', 'engineering'], 'Choose the stage'),
    limits: Type.Array(LimitEdit, { minItems: 1, maxItems: 8 }),
    source,
    readOrMemory,
    scope: Type.Optional(oneLine('Name what the aggregate is taken over, in 200 characters or fewer', 200)),
    sizeBasis: Type.Optional(oneOf(['nameplate', 'export'], 'Choose which size counts')),
    prefaultFactor: Type.Optional(
      Type.Number({
        minimum: 0.5,
        maximum: 1.5,
        errorMessage: 'Enter the prefault voltage between 0.5 and 1.5',
      }),
    ),
    parameters: Type.Optional(Type.Record(Type.String(), Type.Unknown())),
    setAside: Type.Object(
      {
        roles: Type.Array(oneOf(setAsideRoles, 'Choose roles of the utility'), { uniqueItems: true }),
        secondPerson: Type.Boolean({ errorMessage: 'Say whether a second person must agree' }),
      },
      closed,
    ),
  },
  closed,
);
export type RuleEdit = Static<typeof RuleEdit>;

const ClockEdit = Type.Object(
  {
    allowedDays: Type.Integer({
      minimum: 1,
      maximum: 1000,
      errorMessage: 'Enter the days as a whole number between 1 and 1,000',
    }),
    unit: oneOf(['business-day', 'calendar-day'], 'Choose the kind of days'),
    source,
    readOrMemory,
  },
  closed,
);
export type ClockEdit = Static<typeof ClockEdit>;

const FeeEdit = Type.Object(
  {
    label: oneLine('Name the charge', 120),
    currency: Type.String({ pattern: '^[A-Z]{3}$', errorMessage: 'Enter the currency as three letters' }),
    baseCents: cents,
    perKwCents: cents,
    source,
    readOrMemory,
  },
  closed,
);

const size = (words: string) => Type.Number({ exclusiveMinimum: 0, maximum: 1e6, errorMessage: words });

export const FastTrackEdit = Type.Object(
  {
    rows: Type.Array(
      Type.Object(
        {
          fromKv: Type.Number({ minimum: 0, maximum: 1000, errorMessage: 'Enter the voltage in kV' }),
          belowKv: Type.Union([Type.Number(), Type.Null()]),
          anywhereKw: size('Enter the size at any place in kW'),
          mainlineKw: size('Enter the size on a mainline in kW'),
          source,
          readOrMemory,
        },
        closed,
      ),
      { minItems: 1, maxItems: 20 },
    ),
    mainlineMiles: size('Enter the distance in circuit miles'),
    machinesKw: size('Enter the size in kW'),
    maximumKv: size('Enter the voltage in kV'),
    source,
    readOrMemory,
  },
  closed,
);
export type FastTrackEdit = Static<typeof FastTrackEdit>;

const rules = Object.fromEntries(questions.map(({ id }) => [id, Type.Optional(RuleEdit)])) as Record<
  QuestionId,
  TOptional<typeof RuleEdit>
>;
const clocks = Object.fromEntries(
  Object.keys(clockKinds).map((kind) => [kind, Type.Optional(ClockEdit)]),
) as Record<ClockKindKey, TOptional<typeof ClockEdit>>;

/** Saving a page of a draft: what is not named stays as it is. */
export const RuleSetEdit = Type.Object(
  {
    version,
    name: Type.Optional(oneLine('Enter a name, in 120 characters or fewer', 120)),
    fastTrack: Type.Optional(FastTrackEdit),
    rules: Type.Optional(Type.Object(rules, closed)),
    clocks: Type.Optional(Type.Object(clocks, closed)),
    fees: Type.Optional(Type.Array(FeeEdit, { maxItems: 40 })),
  },
  closed,
);
export type RuleSetEdit = Static<typeof RuleSetEdit>;

export const RuleSetPublication = Type.Object(
  {
    version,
    validFrom: Type.String({
      pattern: '^\\d{4}-\\d{2}-\\d{2}$',
      errorMessage: 'Enter the day it comes into force as year-month-day, such as 2027-03-01',
    }),
  },
  closed,
);
export type RuleSetPublication = Static<typeof RuleSetPublication>;

/** One remembered clause, held against its document by whoever sends this. */
export const RuleConfirmation = Type.Object(
  {
    question: oneOf(
      questions.map(({ id }) => id),
      'Name the question',
    ),
  },
  closed,
);
export type RuleConfirmation = Static<typeof RuleConfirmation>;
