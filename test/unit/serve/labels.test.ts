import { describe, expect, it } from 'vitest';

import { boundedLabel } from '../../../src/serve/labels.js';

describe('a bounded label value', () => {
  it('stays as it is when it is short and well formed', () => {
    for (const value of ['', 'approved', '"\\\n', '😀'.repeat(128)]) {
      expect(boundedLabel(value)).toBe(value);
    }
  });

  it('is cut to 256 and stays apart from another that begins alike', () => {
    const [one, two] = ['1', '2'].map((end) => boundedLabel('x'.repeat(1000) + end));
    expect(one).toHaveLength(256);
    expect(one).toMatch(/^x{239}~[0-9a-f]{16}$/);
    expect(two).not.toBe(one);
  });

  it('is not cut between the two halves of a pair', () => {
    const cut = boundedLabel(`a${'😀'.repeat(400)}`);
    expect(Buffer.from(cut, 'utf8').toString('utf8')).toBe(cut);
    expect(boundedLabel('😀'.repeat(400))).toMatch(/^(😀){119}~[0-9a-f]{16}$/u);
  });

  it('holds only what UTF-8 can hold, and lone halves stay apart', () => {
    const values = ['\uD800', '\uD801'].map(boundedLabel);
    expect(values[0]).toMatch(/^\uFFFD~[0-9a-f]{16}$/);
    expect(values[1]).not.toBe(values[0]);
  });
});
