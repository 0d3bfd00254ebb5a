/**
 * The checks that every statistics function makes on what it is given. Each throws `RangeError`
 * naming the argument (with the cell where it has one) and the value.
 */

const SHARE_SUM_TOLERANCE = 1e-9;

/** Refuses anything but a finite number > 0. */
export function requirePositive(name: string, value: number): void {
  if (!(value > 0 && value < Infinity)) {
    throw new RangeError(`${name}: must be a positive finite number, got ${value}`);
  }
}

/** Refuses anything but a number > 0; Infinity is welcome. */
export function requirePositiveOrInfinite(name: string, value: number): void {
  if (!(value > 0)) {
    throw new RangeError(`${name}: must be a positive number or Infinity, got ${value}`);
  }
}

/** Refuses anything but a number strictly between 0 and 1. */
export function requireOpenFraction(name: string, value: number): void {
  if (!(value > 0 && value < 1)) {
    throw new RangeError(`${name}: must lie strictly between 0 and 1, got ${value}`);
  }
}

/** Refuses anything but a number in [0, 1]. */
export function requireFraction(name: string, value: number): void {
  if (!(value >= 0 && value <= 1)) {
    throw new RangeError(`${name}: must lie between 0 and 1, got ${value}`);
  }
}

/** Refuses anything but a whole number in [least, most]. */
export function requireInteger(name: string, value: number, least: number, most: number): void {
  if (!(Number.isInteger(value) && value >= least && value <= most)) {
    throw new RangeError(`${name}: must be an integer from ${least} to ${most}, got ${value}`);
  }
}

/** Refuses an array with a cell that is negative, infinite or not a number. */
export function requireCounts(name: string, counts: readonly number[]): void {
  counts.forEach((count, index) => {
    if (!(count >= 0 && count < Infinity)) {
      throw new RangeError(`${name}[${index}]: must be a finite number >= 0, got ${count}`);
    }
  });
}

/** Refuses an array that is not `length` long. */
export function requireLength(name: string, values: readonly unknown[], length: number): void {
  if (values.length !== length) {
    throw new RangeError(`${name}: must have ${length} cells, got ${values.length}`);
  }
}

/** Refuses shares with a cell outside [0, 1] or a sum off 1 by more than 1e-9. */
export function requireShares(name: string, shares: readonly number[]): void {
  let sum = 0;
  shares.forEach((share, index) => {
    requireFraction(`${name}[${index}]`, share);
    sum += share;
  });
  if (!(Math.abs(sum - 1) <= SHARE_SUM_TOLERANCE)) {
    throw new RangeError(`${name}: must sum to 1, got ${sum}`);
  }
}

/** Refuses a table without rows, ragged, or with a cell that is not a count. */
export function requireTable(name: string, table: readonly (readonly number[])[]): void {
  const width = table[0]?.length;
  if (width === undefined) throw new RangeError(`${name}: must have a row, got none`);
  table.forEach((row, index) => {
    requireLength(`${name}[${index}]`, row, width);
    requireCounts(`${name}[${index}]`, row);
  });
}
