import { z } from 'zod';
import type { TimeTools } from '../terms/time.js';
import { leafJson } from './leaves.js';
import { configSchema } from './schema.js';
import { unwrap } from './sections.js';

/** Describing the schema reads no text, so nothing here is ever asked for a time. */
const noTime: TimeTools = {
  parseDuration: () => null,
  formatDuration: String,
  parseInstant: () => null,
  isZone: () => false,
  ldmlProblem: () => null,
};

/** Markdown table of every key of the configuration: key, default, notes. */
export function referenceTable(): string {
  const rows = rowsOf(configSchema(noTime).whole, '');
  return ['| key | default | notes |', '| --- | --- | --- |', ...rows, ''].join('\n');
}

function rowsOf(schema: z.core.$ZodType, path: string): readonly string[] {
  const inner = unwrap(schema);
  if (inner instanceof z.ZodRecord) return rowsOf(inner.valueType, `${path}.*`);
  if (inner instanceof z.ZodArray && unwrap(inner.element) instanceof z.ZodObject) {
    return rowsOf(inner.element, `${path}[]`);
  }
  if (!(inner instanceof z.ZodObject)) return [];
  return Object.entries(inner.shape).flatMap(([key, child]: [string, z.core.$ZodType]) => {
    const own = path === '' ? key : `${path}.${key}`;
    const notes = z.globalRegistry.get(child)?.description;
    const row = `| \`${own}\` | ${defaultOf(child)} | ${(notes ?? '').replaceAll('|', '\\|')} |`;
    return notes === undefined ? rowsOf(child, own) : [row, ...rowsOf(child, own)];
  });
}

function defaultOf(schema: z.core.$ZodType): string {
  if (schema instanceof z.ZodOptional) return 'none';
  if (!(schema instanceof z.ZodPrefault)) return 'required';
  const value = schema.def.defaultValue;
  if (typeof value === 'string') return `\`${value}\``;
  if (Array.isArray(value)) return 'none';
  return isEmpty(value) ? 'its keys below' : `\`${flow(value)}\``;
}

function isEmpty(value: unknown): boolean {
  return typeof value === 'object' && value !== null && Object.keys(value).length === 0;
}

/** A value as YAML writes it on one line. */
function flow(value: unknown): string {
  if (typeof value !== 'object' || value === null) return String(value);
  const pairs = Object.entries(value).map(([key, inner]) => `${key}: ${flow(inner)}`);
  return `{ ${pairs.join(', ')} }`;
}

/** JSON Schema (draft 2020-12) of the configuration, as editors check YAML with. */
export function jsonSchema(): object {
  return z.toJSONSchema(configSchema(noTime).whole, {
    io: 'input',
    unrepresentable: 'any',
    override: ({ zodSchema, jsonSchema: json }) => {
      const leaf = leafJson.get(zodSchema);
      if (leaf !== undefined) replaceType(json, leaf.json);
      if (zodSchema instanceof z.ZodPrefault) numberDefault(json);
      if (zodSchema instanceof z.ZodObject) json.additionalProperties = false;
      if (zodSchema instanceof z.ZodMap) Object.assign(json, categoryMap(zodSchema));
      if (zodSchema instanceof z.ZodPipe) allowShort(zodSchema, json);
    },
  });
}

/** The leaves read text, so the type that zod sees is not the one that people write. */
function replaceType(json: z.core.JSONSchema.BaseSchema, written: object): void {
  delete json.type;
  Object.assign(json, written);
}

/** Defaults stand as text in the schema; where a number is written, the default is one too. */
function numberDefault(json: z.core.JSONSchema.BaseSchema): void {
  if (json.type === 'number' || json.type === 'integer') json.default = Number(json.default);
}

function categoryMap(schema: z.ZodMap): object {
  const value = leafJson.get(schema.valueType)?.json ?? {};
  return { type: 'object', additionalProperties: value };
}

/** A section or list for which one text may stand. */
function allowShort(schema: z.ZodPipe, json: z.core.JSONSchema.BaseSchema): void {
  if (!(schema.in instanceof z.ZodTransform)) return;
  const full = { ...json };
  delete full.description;
  delete full.default;
  delete json.type;
  delete json.properties;
  delete json.required;
  delete json.additionalProperties;
  delete json.items;
  delete json.minItems;
  delete json.maxItems;
  json.anyOf = [{ type: 'string' }, full];
}
