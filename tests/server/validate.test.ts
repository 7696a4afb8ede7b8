import { Type } from '@sinclair/typebox';
import { describe, expect, it } from 'vitest';
import { AppError } from '../../server/errors.ts';
import { listProblems, validate, validateQuery } from '../../server/validate.ts';
import {
  ConnectionAnswers,
  EquipmentAnswers,
  ProjectAnswers,
  SiteAnswers,
} from '../../shared/schemas/answers.ts';
import { Deficiency, Submission } from '../../shared/schemas/applications.ts';

const inverter = { kva: 1000, kw: 950, kv: 0.48, faultCurrentPu: 1.1, listed: true };

function catchProblems(work: () => unknown): AppError {
  try {
    work();
  } catch (error) {
    if (error instanceof AppError) return error;
    throw error;
  }
  throw new Error('got no refusal, expected one');
}

describe('a value that fits', () => {
  it('comes back as it was', () => {
    const units = [
      { source: 'record', equipmentId: 'abc', count: 2 },
      { source: 'nameplate', kind: 'battery-inverter', nameplate: inverter, count: 1 },
    ];
    expect(validate(EquipmentAnswers, { units })).toEqual({ units });
    expect(listProblems(EquipmentAnswers, { units })).toEqual([]);
  });
});

describe('a value that does not fit', () => {
  it('of a place that was left empty asks for it once, not for each of its two coordinates', () => {
    const words = 'Put the project on the map';
    expect(listProblems(SiteAnswers, {}, 'site')).toEqual([{ path: 'site.lat', message: words }]);
    expect(listProblems(SiteAnswers, { lat: 1 })).toEqual([{ path: 'lng', message: words }]);
    expect(listProblems(SiteAnswers, { lng: 1 })).toEqual([{ path: 'lat', message: words }]);
    expect(listProblems(SiteAnswers, { lat: 1, lng: 1 })).toEqual([]);
  });

  it('without words of its own is told in plain ones, not in the validator’s', () => {
    const Query = Type.Object({
      page: Type.Integer({ minimum: 1, maximum: 9 }),
      outside: Type.Boolean(),
      size: Type.Number({ exclusiveMinimum: 0 }),
      search: Type.String({ maxLength: 3 }),
    });
    const tell = (value: object) => listProblems(Query, value).map(({ message }) => message);
    expect(tell({ page: 0, outside: 'maybe', size: 0, search: 'long' })).toEqual([
      'Must be 1 or more',
      'Answer with true or false',
      'Must be more than 0',
      'Must be 3 characters or fewer',
    ]);
    expect(tell({ page: 'two', outside: true, size: 'x', search: 1 })).toEqual([
      'Give a whole number',
      'Give a number',
      'Give a text',
    ]);
  });

  it('is refused with 400 and the schema’s own words at each field, in the order of the form', () => {
    const error = catchProblems(() =>
      validate(ProjectAnswers, { contactEmail: 'no', description: 5, name: '' }),
    );
    expect(error).toMatchObject({ status: 400, code: 'invalid' });
    expect(error.errors).toEqual([
      { path: 'name', message: 'Enter a name for the project, in 120 characters or fewer' },
      {
        path: 'contactName',
        message: 'Enter the name of the person we should write to, in 120 characters or fewer',
      },
      { path: 'contactEmail', message: 'Enter an e-mail address in the form name@example.org' },
      { path: 'description', message: 'Description must be 2,000 characters or fewer' },
    ]);
  });

  it('has its paths below the base path that was given', () => {
    expect(listProblems(ProjectAnswers, {}, 'project').map(({ path }) => path)).toEqual([
      'project.name',
      'project.contactName',
      'project.contactEmail',
    ]);
  });

  it('is named where it sits in a list', () => {
    const body = {
      version: 1,
      items: [
        { section: 'site', text: 'The lease' },
        { section: 'roof', text: 'x' },
      ],
    };
    expect(listProblems(Deficiency, body)).toEqual([
      { path: 'items.1.section', message: 'Choose the part of the application' },
      { path: 'items.1.text', message: 'Say what is missing, in 3 to 4,000 characters' },
    ]);
  });

  it('speaks by keyword where the schema has words for each', () => {
    const tooMany = Array.from({ length: 21 }, () => ({ source: 'record', equipmentId: 'a', count: 1 }));
    expect(listProblems(EquipmentAnswers, { units: tooMany })).toEqual([
      { path: 'units', message: 'Add 20 groups of units or fewer' },
    ]);
    for (const empty of [{ units: [] }, {}]) {
      expect(listProblems(EquipmentAnswers, empty)).toEqual([
        { path: 'units', message: 'Add at least one generating unit' },
      ]);
    }
  });

  it('has fields that nobody asked for, and each is named', () => {
    const sent = JSON.parse(
      '{"version":1,"attestedBy":"Ada Lund","agrees":true,"__proto__":{},"role":"x"}',
    ) as object;
    expect(listProblems(Submission, sent).map(({ path }) => path)).toEqual(['__proto__', 'role']);
  });

  it('is not an object at all', () => {
    for (const value of [null, undefined, 'text', 5, []]) {
      expect(listProblems(Submission, value)).toEqual([
        { path: '', message: 'Give the fields that belong here' },
      ]);
    }
  });

  it('lacks what an inherited property of every object would pretend is there', () => {
    const schema = Type.Object({ toString: Type.String({ errorMessage: 'Say it in words' }) });
    expect(listProblems(schema, {})).toEqual([{ path: 'toString', message: 'Say it in words' }]);
  });
});

describe('a choice between kinds of objects', () => {
  it('reports the field of the branch that the literals name, and nothing of the others', () => {
    const unit = { source: 'nameplate', kind: 'pv-inverter', nameplate: { ...inverter, kva: -1 }, count: 1 };
    expect(listProblems(EquipmentAnswers, { units: [unit] })).toEqual([
      {
        path: 'units.0.nameplate.kva',
        message: 'Enter the rated apparent power in kilovolt-amperes, from 0.1 to 20,000',
      },
    ]);
  });

  it('asks each field of a group that is missing altogether', () => {
    const unit = { source: 'nameplate', kind: 'synchronous-machine', count: 1 };
    expect(listProblems(EquipmentAnswers, { units: [unit] }).map(({ path }) => path)).toEqual(
      ['kva', 'kw', 'kv', 'rPu', 'xSubtransientPu', 'x2Pu', 'x0Pu'].map(
        (name) => `units.0.nameplate.${name}`,
      ),
    );
  });

  it('reports the literal itself when it names no branch', () => {
    const units = [{ source: 'guess' }, { source: 'nameplate', kind: 'windmill' }, {}];
    expect(listProblems(EquipmentAnswers, { units })).toEqual([
      { path: 'units.0.source', message: 'Choose one of: record, nameplate' },
      { path: 'units.1.kind', message: 'Choose the kind of equipment' },
      { path: 'units.2.source', message: 'Choose one of: record, nameplate' },
    ]);
  });

  it('reports an item that is no object where it stands', () => {
    expect(listProblems(EquipmentAnswers, { units: ['inverter'] })).toEqual([
      { path: 'units.0', message: 'Choose one of the possibilities' },
    ]);
  });

  it('speaks with the words of the choice inside a group, in a branch of a branch', () => {
    const transformer = {
      rating: { source: 'record' },
      windings: 'YNd1',
      utilityNeutral: { kind: 'impedance', rOhm: 5 },
      siteNeutral: 'earthed',
    };
    expect(listProblems(ConnectionAnswers, { phases: 'ABC', transformer })).toEqual([
      { path: 'transformer.rating.equipmentId', message: 'Choose a transformer from the records' },
      { path: 'transformer.utilityNeutral.xOhm', message: 'Reactance must be 0 to 10,000 ohms' },
      { path: 'transformer.siteNeutral', message: 'Say how the neutral is grounded' },
    ]);
  });

  it('takes whichever branch fits where no literal tells them apart', () => {
    const schema = Type.Union([Type.Object({ a: Type.Number() }), Type.Object({ b: Type.Number() })]);
    expect(listProblems(schema, { b: 1 })).toEqual([]);
    expect(listProblems(schema, { c: 1 })).toEqual([
      { path: '', message: 'Choose one of the possibilities' },
    ]);
  });
});

describe('a query string', () => {
  const Query = Type.Object(
    {
      page: Type.Integer({ minimum: 1, default: 1 }),
      outside: Type.Optional(Type.Boolean()),
      search: Type.Optional(Type.String()),
      number: Type.Optional(Type.String()),
    },
    { additionalProperties: false },
  );

  it('is read as the numbers, booleans and text that the schema asks for, defaults filled in', () => {
    expect(validateQuery(Query, { page: '3', outside: 'true', search: '007' })).toEqual({
      page: 3,
      outside: true,
      search: '007',
    });
    expect(validateQuery(Query, { outside: 'false', search: '', page: '' })).toEqual({
      page: 1,
      outside: false,
    });
  });

  it('is refused where a value cannot be read, comes twice, or was not asked for', () => {
    const query = { page: '1.5', outside: 'maybe', search: ['a', 'b'], sort: 'x' };
    const { errors } = catchProblems(() => validateQuery(Query, query));
    expect(errors.map(({ path }) => path)).toEqual(['page', 'outside', 'search', 'sort']);
  });
});
