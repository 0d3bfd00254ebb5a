import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { jsonSchema, referenceTable } from '../../src/config/reference.js';
import { root } from './tools.js';

const read = (path: string) => readFileSync(join(root, path), 'utf8');
const remedy = 'it differs from the schema; run `npm run docs`';

/** What stands between the markers of a generated block; undefined when a marker is missing. */
function referenceIn(text: string): string | undefined {
  return /<!-- reference:start -->\n([\s\S]*?)<!-- reference:end -->/.exec(text)?.[1].trim();
}

describe('what is generated from the configuration’s schema', () => {
  it('stands in the README as the code has it', () => {
    expect(referenceIn(read('README.md')), remedy).toBe(referenceTable().trim());
  });

  it('is published as a JSON Schema as the code has it', () => {
    const written = `${JSON.stringify(jsonSchema(), null, 2)}\n`;
    expect(read('config/schema.json'), remedy).toBe(written);
  });

  it('is found between its markers and nowhere else', () => {
    const text = 'a\n<!-- reference:start -->\n| key |\n<!-- reference:end -->\nb\n';
    expect(referenceIn(text)).toBe('| key |');
    expect(referenceIn('a\nb\n')).toBeUndefined();
  });
});
