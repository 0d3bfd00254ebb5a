import { type ChildProcess, spawn } from 'node:child_process';
import { appendFileSync, mkdirSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { test as base } from 'vitest';

/** The built program, as a user starts it; `npm run build` makes it. */
const program = fileURLToPath(new URL('../../dist/cli/main.js', import.meta.url));

const defaultLimitMs = 30_000;
/** More output than this is a fault of its own; most of it is evidence in JSON. */
const maxOutputChars = 128 * 1024 * 1024;

/** What a finished process said and how it ended; `status` is null after a signal. */
export interface Ended {
  readonly status: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

interface LaunchOptions {
  readonly env?: Readonly<Record<string, string>>;
  readonly stdin?: Buffer | string;
}

/** One process of the program, under way or over. */
export class Running {
  readonly ended: Promise<Ended>;
  private readonly child: ChildProcess;
  private readonly said = { stdout: '', stderr: '' };
  private readonly listeners = new Set<() => void>();
  private over: Ended | null = null;

  constructor(args: readonly string[], cwd: string, options: LaunchOptions) {
    const env = { PATH: process.env['PATH'] ?? '', NO_COLOR: '1', ...options.env };
    this.child = spawn(process.execPath, [program, ...args], { cwd, env });
    this.child.stdout?.setEncoding('utf8').on('data', (text: string) => this.hear('stdout', text));
    this.child.stderr?.setEncoding('utf8').on('data', (text: string) => this.hear('stderr', text));
    // A program that ends without reading all of its input is no fault of the test.
    this.child.stdin?.on('error', () => this.tell());
    this.child.stdin?.end(options.stdin ?? '');
    this.ended = new Promise((resolve, reject) => {
      this.child.on('error', reject);
      this.child.on('close', (status) => {
        this.over = { status, ...this.said };
        this.tell();
        resolve(this.over);
      });
    });
  }

  get stdout(): string {
    return this.said.stdout;
  }

  get isOver(): boolean {
    return this.over !== null;
  }

  /** Waits until standard output has a match; rejects when the process ends or takes too long. */
  waitFor(pattern: RegExp, limitMs = defaultLimitMs): Promise<RegExpExecArray> {
    return new Promise((resolve, reject) => {
      const finish = (settle: () => void): void => {
        clearTimeout(timer);
        this.listeners.delete(look);
        settle();
      };
      const look = (): void => {
        const match = pattern.exec(this.said.stdout);
        const fail = (why: string) => () =>
          reject(new Error(`${why}: ${JSON.stringify(this.said)}`));
        if (match !== null) finish(() => resolve(match));
        else if (this.isOver) finish(fail(`ended before it said ${String(pattern)}`));
      };
      const timer = setTimeout(() => {
        const said = JSON.stringify(this.said);
        finish(() => reject(new Error(`said no ${String(pattern)} in ${limitMs} ms: ${said}`)));
      }, limitMs);
      this.listeners.add(look);
      look();
    });
  }

  /** Sends a signal to this process alone and waits for its end. */
  stop(signal: NodeJS.Signals): Promise<Ended> {
    if (!this.isOver) this.child.kill(signal);
    return this.ended;
  }

  private hear(stream: 'stdout' | 'stderr', text: string): void {
    this.said[stream] += text;
    if (this.said[stream].length > maxOutputChars) this.child.kill('SIGKILL');
    this.tell();
  }

  private tell(): void {
    for (const listener of [...this.listeners]) listener();
  }
}

/** A test's own temporary folder, in which its commands run. */
export class Place {
  readonly folder = mkdtempSync(join(tmpdir(), 'tallyward-e2e-'));
  private readonly processes: Running[] = [];

  path(name: string): string {
    return join(this.folder, name);
  }

  /** Writes a file of the folder, with the folders above it; returns its name. */
  write(name: string, content: string | Buffer): string {
    mkdirSync(dirname(this.path(name)), { recursive: true });
    writeFileSync(this.path(name), content);
    return name;
  }

  append(name: string, content: string | Buffer): void {
    mkdirSync(dirname(this.path(name)), { recursive: true });
    appendFileSync(this.path(name), content);
  }

  read(name: string): string {
    return readFileSync(this.path(name), 'utf8');
  }

  /** Starts the program and lets it run. */
  launch(args: readonly string[], options: LaunchOptions = {}): Running {
    const running = new Running(args, this.folder, options);
    this.processes.push(running);
    return running;
  }

  /** Runs the program to its end; rejects when that takes longer than the limit. */
  async run(
    args: readonly string[],
    options: LaunchOptions & { readonly limitMs?: number } = {},
  ): Promise<Ended> {
    const running = this.launch(args, options);
    const limitMs = options.limitMs ?? defaultLimitMs;
    let isLate = false;
    const timer = setTimeout(() => {
      isLate = true;
      void running.stop('SIGKILL');
    }, limitMs);
    const ended = await running.ended;
    clearTimeout(timer);
    if (isLate) throw new Error(`${args.join(' ')}: not done in ${limitMs} ms: ${ended.stderr}`);
    return ended;
  }

  /** Runs the program, which must end well, and gives what it printed. */
  async output(args: readonly string[], options: LaunchOptions = {}): Promise<string> {
    const { status, stdout, stderr } = await this.run(args, options);
    if (status !== 0) throw new Error(`${args.join(' ')}: exit ${String(status)}: ${stderr}`);
    return stdout;
  }

  /** As `output`, where that is one JSON document. */
  async json(args: readonly string[], options: LaunchOptions = {}): Promise<unknown> {
    const parsed: unknown = JSON.parse(await this.output([...args, '--json'], options));
    return parsed;
  }

  /** Ends what still runs and removes the folder. */
  async clear(): Promise<void> {
    for (const running of this.processes) await running.stop('SIGKILL');
    rmSync(this.folder, { recursive: true, force: true });
  }
}

/** `it` with a place of its own for each test, cleared afterwards. */
export const it = base.extend<{ place: Place }>({
  place: async ({ task: _task }, use) => {
    const place = new Place();
    await use(place);
    await place.clear();
  },
});
