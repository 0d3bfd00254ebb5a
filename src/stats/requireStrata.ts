import { requireLength, requireTable } from './preconditions.js';

/** Refuses tables that are not all counts of one shape, or no table at all. */
export function requireStrata(
  name: string,
  tables: readonly (readonly (readonly number[])[])[],
): { readonly rows: number; readonly columns: number } {
  const first = tables[0];
  if (first === undefined) throw new RangeError(`${name}: must hold a table, got none`);
  const [rows, columns] = [first.length, first[0]?.length ?? 0];
  tables.forEach((table, s) => {
    requireTable(`${name}[${s}]`, table);
    requireLength(`${name}[${s}]`, table, rows);
    requireLength(`${name}[${s}][0]`, table[0] ?? [], columns);
  });
  return { rows, columns };
}
