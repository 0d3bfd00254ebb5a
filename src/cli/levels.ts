import { percent } from '../alert/words.js';
import { simulateLevels } from '../stats/simulateLevels.js';
import { type Ports, printLine, EXIT } from './ports.js';

const SIZES = [30, 100, 300, 1000, 3000];
const SHARES = [0.4, 0.25, 0.15, 0.12, 0.08];
const REPETITIONS = 20_000;
const SEED = 7417;

/** How often two samples of one distribution are called different, by both ways of testing. */
export function levels(ports: Ports): number {
  const rows = simulateLevels({
    seed: SEED,
    repetitions: REPETITIONS,
    sizes: SIZES,
    shares: SHARES,
  });
  printLine(
    ports.stdout,
    'events in each sample | as a table | first sample taken as fixed shares',
  );
  for (const row of rows) {
    const cells = [String(row.n), percent(row.tableLevel), percent(row.fixedLevel)];
    printLine(ports.stdout, cells.join(' | '));
  }
  return EXIT.done;
}
