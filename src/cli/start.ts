import { schedule as cronSchedule } from 'node-cron';
import { openServer } from '../serve/server.js';
import { Daemon } from './daemon.js';
import { loadConfig } from './loadConfig.js';
import { EXIT, type Ports, printLine } from './ports.js';

export interface StartOptions {
  readonly config: string;
  readonly once?: boolean;
  /** Tell of alerts only, not of every window that is not steady. */
  readonly alertsOnly?: boolean;
}

const HEARTBEAT = '* * * * * *';

/** `start`: counts, judges and sends until it is stopped; with --once only what is there now. */
export async function start(options: StartOptions, ports: Ports): Promise<number> {
  const config = loadConfig(options.config, ports);
  for (const note of config.notes) printLine(ports.stderr, `note: ${note}`);
  const mode = options.once === true ? 'once' : 'live';
  const daemon = await Daemon.open({
    config,
    mode,
    ports,
    alertsOnly: options.alertsOnly === true,
  });
  try {
    if (mode === 'once') await daemon.runOnce();
    else await runUntilStopped(daemon, config.listen, ports);
    return EXIT.done;
  } finally {
    await daemon.close();
  }
}

/** One heartbeat a second in UTC wakes the daemon; what is due, its own calendar says. */
async function runUntilStopped(
  daemon: Daemon,
  listen: { readonly host: string; readonly port: number },
  ports: Ports,
): Promise<void> {
  const server = await openServer({
    listen,
    sources: daemon.sources(),
    metrics: daemon.metrics,
    logger: { error: (details, message) => printLine(ports.stderr, errorLine(details, message)) },
  });
  printLine(ports.stdout, `metrics at ${server.address}/metrics`);
  let failure: (error: unknown) => void = () => undefined;
  const failed = new Promise<never>((_resolve, reject) => {
    failure = reject;
  });
  const beat = (): Promise<void> => daemon.beat().catch(failure);
  const heartbeat = cronSchedule(HEARTBEAT, beat, { timezone: 'UTC' });
  void beat();
  try {
    await Promise.race([ports.stopAsked, failed]);
    printLine(ports.stdout, 'stopping');
  } finally {
    await heartbeat.stop();
    await server.close();
  }
}

function errorLine(details: object, message: string): string {
  const { err } = details as { err?: unknown };
  return err instanceof Error ? `${message}: ${err.message}` : message;
}
