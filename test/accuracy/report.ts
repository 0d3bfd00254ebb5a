import type { Line } from './judgement.js';
import type { Miss } from './measure.js';

/** Places of a miss that are written out in full. */
const MOST_SHOWN = 5;

const notes = [
  'error: |ours - theirs| / |theirs| of log p (Sf upper, Cdf lower tails) or of the statistic.',
  "R: noncentral and beta-binomial tails are summed from R's central tails and masses, as its own",
  'ncp loses its digits far out; where R and ours differ beyond the goal, mpmath decides;',
  'what is left within it may be the fault of either.',
];

const head = ['function', 'oracle', 'arguments', 'deepest', 'worst error', 'goal', ''];

/**
 * The lines as a table. Errors are |ours - theirs| / |theirs|, of the natural log of p or of the
 * statistic; at the end of a line what is to be said of the oracle, below it where a goal is
 * missed, and below all what holds for every line.
 */
export function tableOf(lines: readonly Line[]): string {
  const cells = lines.map(cellsOf);
  const widths = head.map((_, at) => Math.max(...[head, ...cells].map((row) => row[at].length)));
  const written = (row: readonly string[]): string =>
    row
      .map((cell, at) => cell.padEnd(widths[at]))
      .join('  ')
      .trimEnd();
  const body = lines.flatMap((line, at) => [written(cells[at]), ...missesOf(line)]);
  return [written(head), ...body, '', ...notes].join('\n');
}

function cellsOf(line: Line): string[] {
  const { method, oracle, compared, deepest, worst, missed } = line;
  return [
    method.name,
    oracle,
    compared.toLocaleString('en'),
    deepest < 0 ? Math.round(deepest).toLocaleString('en') : '',
    worst === undefined ? '' : worst.error.toExponential(1),
    `<= ${method.goal.toExponential()}`,
    missed.length > 0 ? 'MISSED' : `ok${noteOf(line)}`,
  ];
}

function noteOf({ oracle, oracleWrong }: Line): string {
  const [first] = oracleWrong;
  if (first === undefined) return '';
  const many = oracleWrong.length;
  return `; ${oracle} is wrong at ${many} of these by mpmath, such as ${placeOf(first)}`;
}

const placeOf = ({ row, ours, theirs }: Miss): string =>
  `(${row.slice(0, 8).join(', ')}): ours ${ours}, theirs ${theirs}`;

function missesOf({ missed }: Line): string[] {
  return missed.slice(0, MOST_SHOWN).map((miss) => `  missed at ${placeOf(miss)}`);
}
