import { describe, expect, it } from 'vitest';
import { decodeText } from './decodeHelper.js';

const config = {
  kind: 'pattern',
  pattern: '^(?P<ts>\\S+) (?P<level>[A-Z]+)(?: code=(?P<code>\\d+))?',
} as const;

describe('the pattern decoder', () => {
  it('given a line that matches, takes the named groups as fields', () => {
    const line = '2026-11-03T10:00:00Z WARN code=007 é';
    expect(decodeText(config, line, ['level', 'code', 'ts'])).toEqual([
      'WARN',
      '007',
      '2026-11-03T10:00:00Z',
    ]);
  });

  it('given an optional group that took no part, or no such group, says missing', () => {
    const fields = decodeText(config, 'now INFO', ['code', 'none', 'level.deep', 'level']);
    expect(fields).toEqual([null, null, null, 'INFO']);
  });

  it('given a line that does not match, refuses it', () => {
    expect(decodeText(config, 'no capitals', ['level'])).toBe('no-match');
  });

  it('given an unanchored pattern, finds it anywhere in the line', () => {
    const anywhere = { kind: 'pattern', pattern: 'outcome=(?P<outcome>\\w+)' } as const;
    expect(decodeText(anywhere, 'x=1 outcome=declined y', ['outcome'])).toEqual(['declined']);
  });
});
