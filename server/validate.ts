import type { Static, TSchema } from '@sinclair/typebox';
import type { FieldProblem } from '../shared/schemas/problems.ts';
import { invalid } from './errors.ts';
import { checkSchema, type Schema } from './schema-check.ts';

/** Every problem with its dotted path, in the order in which the schema names the fields; empty when all is well. */
export function listProblems(schema: TSchema, value: unknown, basePath = ''): FieldProblem[] {
  return checkSchema(schema as Schema, value, basePath);
}

/** The value, now known to fit; otherwise a refusal (400) that names each field. */
export function validate<S extends TSchema>(schema: S, value: unknown, basePath = ''): Static<S> {
  const problems = listProblems(schema, value, basePath);
  if (problems.length > 0) throw invalid(problems);
  return value as Static<S>;
}

function readText(schema: Schema, text: unknown): unknown {
  if (typeof text !== 'string') return text;
  if (schema.type === 'boolean') return { true: true, false: false }[text] ?? text;
  const isNumber = schema.type === 'number' || schema.type === 'integer';
  return isNumber && text.trim() !== '' && Number.isFinite(Number(text)) ? Number(text) : text;
}

/** A query string has only text: numbers and booleans are read as the schema asks, defaults filled in. */
export function validateQuery<S extends TSchema>(schema: S, query: Record<string, unknown>): Static<S> {
  const read: Record<string, unknown> = { ...query };
  for (const [name, property] of Object.entries((schema as Schema).properties ?? {})) {
    // "?search=" is a field left empty, not a search for nothing.
    const value = query[name] === '' ? undefined : readText(property, query[name]);
    if (value === undefined && property.default === undefined) delete read[name];
    else read[name] = value ?? property.default;
  }
  return validate(schema, read);
}
