import { describe, expect, it } from 'vitest';
import { textFiles, type TextFile } from './tools.js';

/**
 * Lengths that the linter does not see: whole files, blank lines and comments included, and the
 * width of lines that are not TypeScript. Functions are measured by the linter.
 */
const maxFileLines = 300;
const maxLineChars = 100;

const isSource = ({ path }: TextFile) => /^(src|migrations|\.ci)\//.test(path);
const lines = (text: string) => text.replace(/\n$/, '').split('\n');

function tooLong(files: readonly TextFile[]): string[] {
  return files
    .map(({ path, text }) => ({ path, count: lines(text).length }))
    .filter(({ count }) => count > maxFileLines)
    .map(({ path, count }) => `${path}: ${count} lines, at most ${maxFileLines}; split it`);
}

function tooWide(files: readonly TextFile[]): string[] {
  return files.flatMap(({ path, text }) =>
    lines(text)
      .map((line, at) => ({ chars: line.length, where: `${path}:${at + 1}`, line }))
      .filter(({ chars, line }) => chars > maxLineChars && !line.includes('https://'))
      .map(
        ({ chars, where }) => `${where}: ${chars} characters, at most ${maxLineChars}; break it`,
      ),
  );
}

describe('a source file', () => {
  it('has at most 300 lines', () => {
    expect(tooLong(textFiles().filter(isSource))).toEqual([]);
  });

  it('has lines of at most 100 characters', () => {
    expect(tooWide(textFiles().filter(isSource))).toEqual([]);
  });

  it('is named with its size when it has one line or one character too many', () => {
    const long = { path: 'src/long.ts', text: 'x\n'.repeat(maxFileLines + 1) };
    const wide = { path: 'src/wide.ts', text: `${'x'.repeat(maxLineChars + 1)}\n` };
    const fits = { path: 'src/fits.ts', text: `${'x'.repeat(maxLineChars)}\n`.repeat(300) };
    expect(tooLong([long, wide, fits])).toEqual(['src/long.ts: 301 lines, at most 300; split it']);
    expect(tooWide([long, wide, fits])).toEqual([
      'src/wide.ts:1: 101 characters, at most 100; break it',
    ]);
  });
});
