import { Ajv, type ErrorObject, type ValidateFunction } from 'ajv';
import addFormats from 'ajv-formats';
import type { FieldProblem } from '../shared/schemas/problems.ts';

/** The part of JSON Schema that TypeBox writes for us, with our own words beside each rule. */
export interface Schema {
  type?: string;
  const?: unknown;
  default?: unknown;
  anyOf?: Schema[];
  allOf?: Schema[];
  properties?: Record<string, Schema>;
  required?: string[];
  additionalProperties?: boolean | Schema;
  patternProperties?: Record<string, Schema>;
  items?: Schema;
  /** One sentence for whatever is wrong, or one for each keyword. */
  errorMessage?: string | Record<string, string>;
  /** Another field of the same object, given in the same place: what is wrong with both is told there, once. */
  askedWith?: string;
}

const ajv = new Ajv({ strict: true });
addFormats.default(ajv);
ajv.addKeyword('errorMessage');
ajv.addKeyword('askedWith');

/** Compiled once for each place in a schema: its own keywords, without what stands below it. */
const compiled = new WeakMap<Schema, ValidateFunction>();

function compile(schema: Schema): ValidateFunction {
  const known = compiled.get(schema);
  if (known !== undefined) return known;
  const own = isObject(schema) || isArray(schema) ? withoutChildren(schema) : schema;
  const made = ajv.compile(own);
  compiled.set(schema, made);
  return made;
}

function withoutChildren(schema: Schema): Schema {
  const { properties: _p, required: _r, additionalProperties: _a, items: _i, ...own } = schema;
  return own;
}

function isObject(schema: Schema): boolean {
  return schema.properties !== undefined && typeof schema.additionalProperties !== 'object';
}

function isArray(schema: Schema): boolean {
  return schema.items !== undefined;
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function join(path: string, step: string | number): string {
  return path === '' ? String(step) : `${path}.${step}`;
}

function findWords(schema: Schema, keyword: string): string | undefined {
  return typeof schema.errorMessage === 'string' ? schema.errorMessage : schema.errorMessage?.[keyword];
}

/** The values that a property written as a literal, or as a choice of literals, may have. */
function listLiterals(schema: Schema | undefined): unknown[] | undefined {
  if (schema?.const !== undefined) return [schema.const];
  const choices = schema?.anyOf?.map((choice) => choice.const);
  return choices?.every((choice) => choice !== undefined) ? choices : undefined;
}

type Params = { limit?: number; type?: string };

const typeWords: Record<string, string> = {
  integer: 'Give a whole number',
  number: 'Give a number',
  boolean: 'Answer with true or false',
  string: 'Give a text',
  array: 'Give a list',
  object: 'Give the fields that belong here',
};

/** Where the schema has no words of its own, as in most queries. */
const plainWords: Record<string, (params: Params) => string | undefined> = {
  type: ({ type }) => typeWords[type ?? ''],
  minimum: ({ limit }) => `Must be ${limit} or more`,
  maximum: ({ limit }) => `Must be ${limit} or less`,
  exclusiveMinimum: ({ limit }) => `Must be more than ${limit}`,
  exclusiveMaximum: ({ limit }) => `Must be less than ${limit}`,
  minLength: ({ limit }) => (limit === 1 ? 'This is needed' : `Must be ${limit} characters or more`),
  maxLength: ({ limit }) => `Must be ${limit} characters or fewer`,
  minItems: ({ limit }) => `Give ${limit} or more`,
  maxItems: ({ limit }) => `Give ${limit} or fewer`,
};

function describe(error: ErrorObject | undefined, schema: Schema): string {
  const words = error && findWords(schema, error.keyword);
  if (words !== undefined) return words;
  const literals = listLiterals(schema);
  if (literals !== undefined) return `Choose one of: ${literals.join(', ')}`;
  return (error && plainWords[error.keyword]?.(error.params as Params)) ?? 'This cannot be used';
}

function checkOwn(schema: Schema, value: unknown, path: string): FieldProblem[] {
  const check = compile(schema);
  return check(value) ? [] : [{ path, message: describe(check.errors?.[0], schema) }];
}

function checkMissing(schema: Schema, path: string): FieldProblem[] {
  const words = findWords(schema, 'required') ?? findWords(schema, 'minItems');
  if (words !== undefined) return [{ path, message: words }];
  // A group of fields that is missing altogether: each of its fields is asked for.
  if (isObject(schema)) return checkSchema(schema, {}, path);
  if (isChoiceOfObjects(schema)) return checkChoice(schema, {}, path);
  return [{ path, message: 'This is needed' }];
}

function checkObject(schema: Schema, value: unknown, path: string): FieldProblem[] {
  const own = checkOwn(schema, value, path);
  if (own.length > 0 || !isRecord(value)) return own;
  const properties = schema.properties ?? {};
  const byField = new Map(
    Object.entries(properties).map(([name, property]) => {
      const at = join(path, name);
      if (Object.hasOwn(value, name) && value[name] !== undefined)
        return [name, checkSchema(property, value[name], at)];
      return [name, schema.required?.includes(name) ? checkMissing(property, at) : []];
    }),
  );
  const isToldElsewhere = (name: string) => byField.get(properties[name]?.askedWith ?? '')?.length;
  const problems = [...byField].flatMap(([name, own]) => (isToldElsewhere(name) ? [] : own));
  if (schema.additionalProperties !== false) return problems;
  const unknown = Object.keys(value).filter((name) => !Object.hasOwn(properties, name));
  return [
    ...problems,
    ...unknown.map((name) => ({ path: join(path, name), message: 'This is not asked for' })),
  ];
}

function checkArray(schema: Schema, value: unknown, path: string): FieldProblem[] {
  const own = checkOwn(schema, value, path);
  if (own.length > 0 || !Array.isArray(value)) return own;
  return value.flatMap((item, index) => checkSchema(schema.items as Schema, item, join(path, index)));
}

function isChoiceOfObjects(schema: Schema): boolean {
  return schema.anyOf?.every(isObject) ?? false;
}

/** A property that every remaining branch pins to literals: what tells the branches apart. */
function findDiscriminator(branches: Schema[], used: string[]): string | undefined {
  const names = Object.keys(branches[0]?.properties ?? {}).filter((name) => !used.includes(name));
  return names.find((name) => branches.every((branch) => listLiterals(branch.properties?.[name])));
}

/** The branches that the value's literals leave, or the problem with a literal that fits none of them. */
function narrow(schema: Schema, value: Record<string, unknown>, path: string): Schema[] | FieldProblem {
  let branches = schema.anyOf ?? [];
  const used: string[] = [];
  while (branches.length > 1) {
    const name = findDiscriminator(branches, used);
    if (name === undefined) break;
    used.push(name);
    const read = (branch: Schema) => listLiterals(branch.properties?.[name]) ?? [];
    const fitting = branches.filter((branch) => read(branch).includes(value[name]));
    if (fitting.length === 0) {
      const own = branches.map((branch) => findWords(branch.properties?.[name] ?? {}, 'anyOf')).find(Boolean);
      const choices = `Choose one of: ${[...new Set(branches.flatMap(read))].join(', ')}`;
      return { path: join(path, name), message: own ?? findWords(schema, 'anyOf') ?? choices };
    }
    branches = fitting;
  }
  return branches;
}

/** A choice between kinds of objects: the literals in the value say which was meant, and only that one speaks. */
function checkChoice(schema: Schema, value: unknown, path: string): FieldProblem[] {
  const none = { path, message: findWords(schema, 'anyOf') ?? 'Choose one of the possibilities' };
  if (!isRecord(value)) return [none];
  const branches = narrow(schema, value, path);
  if (!Array.isArray(branches)) return [branches];
  const answers = branches.map((branch) => checkSchema(branch, value, path));
  if (answers.length === 1) return answers.flat();
  return answers.some((answer) => answer.length === 0) ? [] : [none];
}

/** Problems in the order in which the schema names the fields, each with its dotted path. */
export function checkSchema(schema: Schema, value: unknown, path: string): FieldProblem[] {
  if (schema.allOf !== undefined) return schema.allOf.flatMap((part) => checkSchema(part, value, path));
  if (isChoiceOfObjects(schema)) return checkChoice(schema, value, path);
  if (isObject(schema)) return checkObject(schema, value, path);
  return isArray(schema) ? checkArray(schema, value, path) : checkOwn(schema, value, path);
}
