/**
 * For each row the sum of all the other rows, cell by cell.
 *
 * Added up from both ends and never by taking a row off the whole, so that what is nothing stays
 * nothing. In: rows of equal length. Out: as many rows. Cost: linear.
 */
export function sumsOfOthers(rows: readonly (readonly number[])[]): number[][] {
  const zero = (rows[0] ?? []).map(() => 0);
  const before = runningSums(rows, zero);
  const after = runningSums([...rows].reverse(), zero).reverse();
  return rows.map((_, s) => add(before[s] ?? zero, after[s] ?? zero));
}

/** For each row the sum of those before it. */
function runningSums(rows: readonly (readonly number[])[], zero: readonly number[]): number[][] {
  let running = [...zero];
  return rows.map((row) => {
    const before = running;
    running = add(running, row);
    return before;
  });
}

function add(a: readonly number[], b: readonly number[]): number[] {
  return a.map((x, k) => x + (b[k] ?? 0));
}
