/**
 * Every way to place `total` events in cells with room for `caps` each.
 *
 * Calls `visit` with the cells (one array, reused: copy what is to last) and the sum of
 * `cell(i, x)` over them, in lexicographic order, until it gives false. Out: false if it did.
 * In: whole numbers >= 0; without enough room there is no way and `visit` is not called.
 */
export function compose(
  caps: readonly number[],
  total: number,
  cell: (index: number, events: number) => number,
  visit: (cells: readonly number[], value: number) => boolean,
): boolean {
  const cells = caps.map(() => 0);
  const roomAfter = caps.map(() => 0);
  for (let i = caps.length - 2; i >= 0; i -= 1) {
    roomAfter[i] = (roomAfter[i + 1] ?? 0) + (caps[i + 1] ?? 0);
  }
  const place = (i: number, left: number, value: number): boolean => {
    if (i === caps.length) return visit(cells, value);
    const most = Math.min(left, caps[i] ?? 0);
    for (let x = Math.max(0, left - (roomAfter[i] ?? 0)); x <= most; x += 1) {
      cells[i] = x;
      if (!place(i + 1, left - x, value + cell(i, x))) return false;
    }
    return true;
  };
  return place(0, total, 0);
}
