import { appendFileSync, mkdirSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { join } from 'node:path';
import { wholeOption } from '../options.js';
import { type Ports, printLine } from '../ports.js';
import { start } from '../start.js';
import { demoConfig, GROWING_DEPOT, Scenario, SHIFTED_DEPOT } from './scenario.js';

const FOLDER = join('var', 'demo');
const PORT = 7417;
const SEED = 20_261;
const SECOND_MS = 1000;
/** History that the baseline is made from. */
const HISTORY_MS = 30 * 60 * SECOND_MS;
/** Written in pieces, so that no text grows large. */
const PIECE_MS = 60 * SECOND_MS;
const WRITE_EVERY_MS = 250;
const SHIFT_AFTER_MS = 30 * SECOND_MS;

export interface DemoOptions {
  readonly seconds?: string;
}

/** `demo`: an invented company's log with a shift in it, watched live. */
export async function demo(options: DemoOptions, ports: Ports): Promise<number> {
  const seconds =
    options.seconds === undefined
      ? null
      : wholeOption('--seconds', options.seconds, { least: 1, most: 86_400 });
  rmSync(FOLDER, { recursive: true, force: true });
  mkdirSync(FOLDER, { recursive: true });
  const config = join(FOLDER, 'tallyward.yaml');
  writeFileSync(config, demoConfig(FOLDER, await freePort()));
  const scenario = new Scenario(SEED);
  const startedMs = ports.clock.nowMs();
  writeHistory(scenario, startedMs);
  introduce(ports, config);
  const writer = new LiveWriter(scenario, ports, startedMs);
  const stop = seconds === null ? ports.stopAsked : Promise.race([ports.stopAsked, wait(seconds)]);
  try {
    return await start({ config, alertsOnly: true }, { ...ports, stopAsked: stop });
  } finally {
    writer.stop();
  }
}

function logFile(): string {
  return join(FOLDER, 'depots.ndjson');
}

function writeHistory(scenario: Scenario, untilMs: number): void {
  for (let at = untilMs - HISTORY_MS; at < untilMs; at += PIECE_MS) {
    appendFileSync(logFile(), scenario.lines(at, Math.min(at + PIECE_MS, untilMs), false));
  }
}

/** Goes on where the history ended, with the machine's own time. */
class LiveWriter {
  private readonly timer: NodeJS.Timeout;
  private writtenMs: number;
  private shiftTold = false;

  constructor(scenario: Scenario, ports: Ports, startedMs: number) {
    this.writtenMs = startedMs;
    this.timer = setInterval(() => {
      const nowMs = ports.clock.nowMs();
      const shifted = this.writtenMs >= startedMs + SHIFT_AFTER_MS;
      if (shifted && !this.shiftTold) tellShift(ports);
      this.shiftTold = shifted;
      appendFileSync(logFile(), scenario.lines(this.writtenMs, nowMs, shifted));
      this.writtenMs = nowMs;
    }, WRITE_EVERY_MS);
  }

  stop(): void {
    clearInterval(this.timer);
  }
}

function introduce(ports: Ports, config: string): void {
  printLine(
    ports.stdout,
    [
      'Saltmere Parcels (invented) has four depots. Half an hour of their log lies there already;',
      `new lines are written as you watch. The configuration is ${config}.`,
      'In half a minute one depot will begin to damage parcels, and another will only get busier.',
      'Stop with Ctrl-C.',
    ].join('\n'),
  );
}

function tellShift(ports: Ports): void {
  printLine(
    ports.stdout,
    `(from now on ${SHIFTED_DEPOT} damages more parcels; ${GROWING_DEPOT} only has more of them)`,
  );
}

function wait(seconds: number): Promise<void> {
  return new Promise((resolve) => {
    setTimeout(resolve, seconds * SECOND_MS).unref();
  });
}

/** The usual port, or any other when something is listening there. */
async function freePort(): Promise<number> {
  return (await canListen(PORT)) ? PORT : 0;
}

function canListen(port: number): Promise<boolean> {
  return new Promise((resolve) => {
    const server = createServer();
    server.once('error', () => resolve(false));
    server.listen(port, '127.0.0.1', () => server.close(() => resolve(true)));
  });
}
