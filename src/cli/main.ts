#!/usr/bin/env node
import { Command, CommanderError } from 'commander';
import { systemClock, systemRandom } from '../clock/clock.js';
import { ServeError } from '../serve/server.js';
import { StoreError } from '../store/store.js';
import { check, type CheckOptions } from './check.js';
import { demo, type DemoOptions } from './demo/demo.js';
import { levels } from './levels.js';
import { CommandError, EXIT, type Ports, printLine } from './ports.js';
import { rehearse, type RehearseOptions } from './rehearse.js';
import { start, type StartOptions } from './start.js';
import { tallies, type TalliesOptions } from './tallies.js';
import { verdicts, type VerdictsOptions } from './verdicts.js';
import { programVersion } from './version.js';
import { weigh, type WeighOptions } from './weigh.js';

/** What a command's own function gives: an exit status. */
type Outcome = number | Promise<number>;

function main(): void {
  const ports: Ports = {
    clock: systemClock,
    env: process.env,
    stdin: process.stdin,
    stdout: process.stdout,
    stderr: process.stderr,
    random: systemRandom,
    stopAsked: untilStopped(),
  };
  // A reader that has seen enough (`| head`) is no failure of ours.
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code === 'EPIPE') process.exit(EXIT.done);
    throw error;
  });
  const finish = (outcome: Outcome): Promise<void> =>
    Promise.resolve(outcome).then((status) => {
      process.exitCode = status;
    });
  program(ports, finish)
    .parseAsync(process.argv)
    .catch((error: unknown) => {
      process.exitCode = failure(error, ports);
    })
    // A pipe that is still open on standard input must not keep a finished command alive.
    .finally(() => process.stdin.destroy());
}

function program(ports: Ports, finish: (outcome: Outcome) => Promise<void>): Command {
  const tallyward = new Command('tallyward')
    .description('Watches categorical logs and says when their mix has truly changed.')
    .version(programVersion())
    .exitOverride()
    .showHelpAfterError('(tallyward COMMAND --help lists what it takes)');
  addDaemon(tallyward, ports, finish);
  addDesk(tallyward, ports, finish);
  addReading(tallyward, ports, finish);
  return tallyward;
}

type Add = (program: Command, ports: Ports, finish: (outcome: Outcome) => Promise<void>) => void;

const CONFIG = ['--config <file>', 'the configuration'] as const;
const JSON_OPTION = ['--json', 'print JSON for a program'] as const;
const FROM = ['--from <time>', 'only windows that begin at or after this time'] as const;
const TO = ['--to <time>', 'only windows that end by this time'] as const;

const addDaemon: Add = (program, ports, finish) => {
  program
    .command('start')
    .description('count, judge and send until stopped')
    .requiredOption(...CONFIG)
    .option('--once', 'read what is there, judge what is closed, send what is due, and exit')
    .action((options: StartOptions) => finish(start(options, ports)));
  program
    .command('check')
    .description('say what a configuration will do, or everything that is wrong with it')
    .requiredOption(...CONFIG)
    .option(...JSON_OPTION)
    .action((options: CheckOptions) => finish(check(options, ports)));
  program
    .command('demo')
    .description('watch an invented company whose mix shifts after half a minute')
    .option('--seconds <n>', 'stop by itself after so many seconds')
    .action((options: DemoOptions) => finish(demo(options, ports)));
};

const addDesk: Add = (program, ports, finish) => {
  program
    .command('weigh')
    .description('compare two samples once: logs, or files of category,count')
    .argument('<before>', 'the older sample')
    .argument('<after>', 'the newer sample')
    .option('--category <field>', 'the field to count, where the samples are logs')
    .option('--decode <form>', 'how the logs are written', 'json')
    .option('--time <field>', 'the field of the time, for --window')
    .option('--window <length>', 'learn from windows of BEFORE how much the mix varies by itself')
    .option('--declared', 'take BEFORE as fixed shares, not as a sample')
    .option('--ordered <list>', 'categories that have an order, low to high, by commas')
    .option('--exact', 'an exact p, given the margins')
    .option('--monte-carlo <n>', 'a p by so many sampled tables')
    .option('--seed <n>', 'seed of the sampled tables')
    .option('--no-pooling', 'leave rare categories apart')
    .option('--fail-on-shift <p>', 'exit 1 when p is below this')
    .option(...JSON_OPTION)
    .action((before: string, after: string, options: WeighOptions) =>
      finish(weigh(before, after, options, ports)),
    );
  program
    .command('rehearse')
    .description('run history through the same code on a virtual clock; send nothing')
    .requiredOption(...CONFIG)
    .option(...FROM)
    .option(...TO)
    .option('--verdicts <file>', 'write every verdict with its evidence, a JSON line each')
    .option('--store <file>', 'judge the stored tallies of this store again')
    .option(...JSON_OPTION)
    .action((options: RehearseOptions) => finish(rehearse(options, ports)));
  program
    .command('levels')
    .description('show by simulation why a sampled reference belongs into a table')
    .action(() => finish(levels(ports)));
};

const addReading: Add = (program, ports, finish) => {
  program
    .command('tallies')
    .description('the stored counts, also while the daemon runs')
    .requiredOption(...CONFIG)
    .option('--mix <name>', 'only this mix')
    .option(...FROM)
    .option(...TO)
    .option('--csv', 'print CSV')
    .option(...JSON_OPTION)
    .action((options: TalliesOptions) => finish(tallies(options, ports)));
  program
    .command('verdicts')
    .description('the stored verdicts, a line each; as JSON with their whole evidence')
    .requiredOption(...CONFIG)
    .option('--mix <name>', 'only this mix')
    .option(...FROM)
    .option(...TO)
    .option(...JSON_OPTION)
    .action((options: VerdictsOptions) => finish(verdicts(options, ports)));
};

/** Says what went wrong and gives the exit status; a trace only for a fault of our own. */
function failure(error: unknown, ports: Ports): number {
  if (error instanceof CommanderError) return error.exitCode === 0 ? EXIT.done : EXIT.usage;
  if (error instanceof CommandError) {
    printLine(ports.stderr, error.message);
    return error.exit;
  }
  if (error instanceof StoreError || error instanceof ServeError) {
    printLine(ports.stderr, error.message);
    return EXIT.failed;
  }
  const told = error instanceof Error ? (error.stack ?? error.message) : String(error);
  printLine(ports.stderr, `tallyward failed by a fault of its own: ${told}`);
  return EXIT.failed;
}

function untilStopped(): Promise<void> {
  return new Promise((resolve) => {
    for (const signal of ['SIGINT', 'SIGTERM'] as const) process.once(signal, () => resolve());
  });
}

main();
