import { cpSync, mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterEach, describe, expect, it } from 'vitest';
import { root, run, runScript, toolTimeoutMs } from './tools.js';

const made: string[] = [];

/** A throw-away project with our import rules and the given sources; returns its folder. */
function projectWith(sources: Record<string, string>): string {
  const folder = mkdtempSync(join(tmpdir(), 'tallyward-imports-'));
  made.push(folder);
  for (const name of ['.dependency-cruiser.mjs', 'package.json', 'tsconfig.json']) {
    cpSync(join(root, name), join(folder, name));
  }
  symlinkSync(join(root, 'node_modules'), join(folder, 'node_modules'));
  for (const [path, text] of Object.entries(sources)) {
    mkdirSync(dirname(join(folder, path)), { recursive: true });
    writeFileSync(join(folder, path), text);
  }
  return folder;
}

async function rulesBrokenBy(sources: Record<string, string>): Promise<string[]> {
  const program = join(root, 'node_modules', '.bin', 'depcruise');
  const args = ['--config', '.dependency-cruiser.mjs', '--output-type', 'err', 'src'];
  const { output } = await run(program, args, projectWith(sources));
  return [...output.matchAll(/error ([a-z-]+): /g)].map((match) => match[1]).sort();
}

afterEach(() => {
  for (const folder of made.splice(0)) rmSync(folder, { recursive: true, force: true });
});

describe('the import rules', { timeout: toolTimeoutMs }, () => {
  it('hold for every file of src and test', async () => {
    const { status, output } = await runScript('imports');
    expect(status, output).toBe(0);
  });

  it('let a room import what its row names', async () => {
    const broken = await rulesBrokenBy({
      'src/terms/word.ts': 'export interface Word { readonly text: string }\n',
      'src/judge/read.ts':
        "import type { Word } from '../terms/word.js';\nexport const read = (w: Word) => w.text;\n",
    });
    expect(broken).toEqual([]);
  });

  it('name the room when a file imports upwards, even for a type alone', async () => {
    const broken = await rulesBrokenBy({
      'src/store/row.ts': 'export interface Row { readonly id: number }\n',
      'src/stats/sum.ts':
        "import type { Row } from '../store/row.js';\nexport const sum = (r: Row) => r.id;\n",
    });
    expect(broken).toEqual(['room-stats']);
  });

  it('name the cycle when two files need each other', async () => {
    const broken = await rulesBrokenBy({
      'src/clock/a.ts': "import type { B } from './b.js';\nexport interface A { b: B }\n",
      'src/clock/b.ts': "import type { A } from './a.js';\nexport interface B { a: A }\n",
    });
    expect(broken).toContain('no-cycle');
  });

  it('refuse a pure room that opens a file', async () => {
    const broken = await rulesBrokenBy({
      'src/judge/peek.ts':
        "import { readFileSync } from 'node:fs';\nexport const peek = () => readFileSync('x');\n",
    });
    expect(broken).toEqual(['pure-rooms-touch-no-machine']);
  });

  it('refuse a folder that the table of rooms does not know', async () => {
    const broken = await rulesBrokenBy({
      'src/terms/word.ts': 'export interface Word { readonly text: string }\n',
      'src/misc/read.ts':
        "import type { Word } from '../terms/word.js';\nexport const read = (w: Word) => w.text;\n",
    });
    expect(broken).toEqual(['unknown-room']);
  });
});
