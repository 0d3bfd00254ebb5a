import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { expandGlob, matches } from '../../../src/collect/tail/glob.js';

describe('wildcards', () => {
  const cases: readonly [string, string, boolean][] = [
    ['gateway-1.log', 'gateway-*.log', true],
    ['gateway-.log', 'gateway-*.log', true],
    ['gateway-1.log.1', 'gateway-*.log', false],
    ['gateway-1.log.1', 'gateway-*.log*', true],
    ['a1', 'a?', true],
    ['a', 'a?', false],
    ['a😀', 'a?', true],
    ['aab', '*ab', true],
    ['.hidden', '*', false],
    ['.hidden', '.*', true],
    ['a.b', 'a[.]b', false],
    ['a+b', 'a+b', true],
    [`${'a'.repeat(200)}b`, `${'*a'.repeat(100)}*c`, false],
  ];
  it.each(cases)('given the name %s and the pattern %s, decides %s', (name, pattern, expected) => {
    expect(matches(name, pattern)).toBe(expected);
  });

  it('given wildcards in folders and names, finds the paths in order', async () => {
    const folder = mkdtempSync(path.join(tmpdir(), 'tallyward-glob-'));
    try {
      for (const name of ['b', 'a', 'c']) {
        mkdirSync(path.join(folder, name));
        writeFileSync(path.join(folder, name, 'x.log'), '');
      }
      writeFileSync(path.join(folder, 'a', 'w.log'), '');
      const found = await expandGlob(`${folder}/?/*.log`);
      const relative = found.paths.map((file) => file.slice(folder.length));
      expect(relative).toEqual(['/a/w.log', '/a/x.log', '/b/x.log', '/c/x.log']);
      expect(found.problems).toEqual([]);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});
