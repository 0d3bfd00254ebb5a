import { describe, expect, it } from 'vitest';
import { textFiles, type TextFile } from './tools.js';

/** A word is given in pieces, so that this file does not hold what it forbids. */
const joined = (...pieces: string[]) => pieces.join('');
const word = (...pieces: string[]) => new RegExp(`\\b${joined(...pieces)}`, 'i');
const exact = (...pieces: string[]) => new RegExp(joined(...pieces));

interface Ban {
  readonly pattern: RegExp;
  readonly why: string;
  /** Where it applies; everywhere when absent. */
  readonly within?: RegExp;
}

const bans = (why: string, patterns: readonly RegExp[], within?: RegExp): Ban[] =>
  patterns.map((pattern) => ({ pattern, why, ...(within && { within }) }));

const everyBan: readonly Ban[] = [
  ...bans('names a folder of one machine; use a relative path', [
    exact('/wo', 'rk/'),
    exact('/ro', 'ot/'),
    exact('/Us', 'ers/'),
    exact('/home/', '[a-z]+/(src|code|projects|dev)'),
  ]),
  ...bans('names a place packages come from; the lock file and npm know it', [
    word('arti', 'factory'),
    word('ver', 'daccio'),
    exact('https?://[^/\\s"]*regi', 'stry'),
    exact('"resol', 'ved":'),
  ]),
  ...bans('tells a story about the text; say the thing itself', [
    word('trans', 'cript'),
    word('lec', 'tur(e|er|es|ers|ing)\\b'),
    word('(the|this|that|his|her|your) ', 'talk\\b'),
    word('web', 'inar'),
  ]),
  ...bans('says who or what wrote it; leave that out', [
    word('cla', 'ude'),
    word('anth', 'ropic'),
    word('chat', 'gpt'),
    word('open', 'ai\\b'),
    word('copi', 'lot'),
    word('language ', 'model'),
    exact('\\bLL', 'Ms?\\b'),
    exact('\\bAI', '[- ](generated|written|assisted|authored)'),
    word('co-auth', 'ored-by'),
    word('generated ', 'with\\b'),
  ]),
  ...bans('is unfinished; finish it or leave it out', [
    exact('\\bTO', 'DO\\b'),
    exact('\\bFIX', 'ME\\b'),
  ]),
  ...bans('silences a rule; obey it, or change the rule in sight of all', [
    word('eslint-dis', 'able'),
    exact('@ts-', '(ignore|nocheck|expect-error)'),
    word('prettier-ig', 'nore\\b(?!\\.)'),
  ]),
  ...bans(
    'leaves a test out; run it or remove it',
    [exact('\\b(it|test|describe)\\.', '(only|skip|todo)\\b')],
    /^test\//,
  ),
];

function found(files: readonly TextFile[]): string[] {
  return files.flatMap(({ path, text }) =>
    text
      .split('\n')
      .flatMap((line, at) =>
        everyBan
          .filter(({ within, pattern }) => (within?.test(path) ?? true) && pattern.test(line))
          .map(({ pattern, why }) => `${path}:${at + 1}: ${pattern.exec(line)?.[0] ?? ''} ${why}`),
      ),
  );
}

describe('the words of the project', () => {
  it('hold no path of a machine, no author, no silenced rule and nothing unfinished', () => {
    expect(found(textFiles())).toEqual([]);
  });

  it('are named with file, line and reason when they do', () => {
    const text = `fine\n// ${joined('TO', 'DO')} later\nit.${joined('on', 'ly')}('x')\n`;
    const [todo, only] = found([{ path: 'test/unit/x.test.ts', text }]);
    expect(todo).toMatch(
      /^test\/unit\/x\.test\.ts:2: .* is unfinished; finish it or leave it out$/,
    );
    expect(only).toMatch(/^test\/unit\/x\.test\.ts:3: .* leaves a test out; run it or remove it$/);
  });

  it('may be near a banned one without being it', () => {
    const text = 'const subscription = manuscript; openapi(); talks to the store; skipIf\n';
    expect(found([{ path: 'test/unit/x.test.ts', text }])).toEqual([]);
  });
});
