import { describe, expect, it } from 'vitest';
import { jsonSchema, referenceTable } from '../../../src/config/reference.js';

describe('the reference table', () => {
  const rows = referenceTable().split('\n');

  it.each([
    '| `store` | `var/tallyward.db` | SQLite file. |',
    '| `mixes.*.lateness` | `30s` | Up to 60d. |',
    '| `mixes.*.limits.min_events` | `20` | A window with fewer events is thin. |',
    '| `mixes.*.where[].field` | required | Field path that the condition looks at. |',
  ])('has the row %s', (row) => {
    expect(rows).toContain(row);
  });

  it('has a note in every row and no key that is not built yet', () => {
    const cells = rows.slice(2, -1).map((row) => row.split(' | '));
    expect(cells.filter(([, , note = '']) => note === '' || note === '|')).toEqual([]);
    expect(referenceTable()).not.toMatch(/\*\.keep`|once_per|peers|tokens|email/);
  });
});

describe('the JSON Schema', () => {
  const schema = JSON.parse(JSON.stringify(jsonSchema())) as object;
  const mix = { properties: { mixes: { additionalProperties: { properties: {} } } } };
  const withMix = (properties: object) => {
    const copy = structuredClone(mix);
    copy.properties.mixes.additionalProperties.properties = properties;
    return copy;
  };

  it('refuses unknown keys and asks for collectors and mixes', () => {
    expect(schema).toMatchObject({
      additionalProperties: false,
      required: ['collectors', 'mixes'],
    });
  });

  it('has numbers as numbers, with numbers as defaults', () => {
    const events = { type: 'integer', minimum: 1, maximum: 1_000_000, default: 20 };
    expect(schema).toMatchObject(withMix({ limits: { properties: { min_events: events } } }));
  });

  it('allows one percentage for the section of tolerances', () => {
    expect(schema).toMatchObject(
      withMix({ tolerance: { anyOf: [{ type: 'string' }, { type: 'object' }] } }),
    );
  });

  it('describes shares by category', () => {
    const declared = { type: 'object', additionalProperties: { type: 'string' } };
    expect(schema).toMatchObject(withMix({ yardstick: { properties: { declared } } }));
  });

  it('is the same each time', () => {
    expect(JSON.stringify(jsonSchema())).toBe(JSON.stringify(schema));
  });
});
