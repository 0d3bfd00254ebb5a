import type { Database } from 'better-sqlite3';

/** The categories of one mix. */
export interface CategoryBook {
  readonly idOf: ReadonlyMap<string, number>;
  /** By id: the name, and its place in code-point order. */
  readonly names: readonly string[];
  readonly rank: readonly number[];
}

/**
 * Ids of mixes, strands and categories. Rows of these tables are never changed or removed, so an
 * id once read stays right, also when other processes write; the caches are bounded by the limits
 * on mixes, strands and categories.
 */
export interface Names {
  /** null when the mix has never been seen. */
  findMix(mix: string): number | null;
  findStrand(mixId: number, strand: string): number | null;
  /** Gives an id where there is none yet; for use inside a writing transaction. */
  mixId(mix: string): number;
  strandId(mixId: number, strand: string): number;
  /** Adds the categories that are new, in the order given. */
  addCategories(mixId: number, categories: readonly string[]): void;
  /** The categories known when last loaded; `reload` looks again. */
  categories(mixId: number, reload?: 'reload'): CategoryBook;
  /** Drops all that is cached, after a transaction was rolled back. */
  forget(): void;
}

const LONE_SURROGATE = /[\uD800-\uDFFF]/gu;

/** UTF-8 has no half surrogate pairs: SQLite keeps U+FFFD in their place, and so must look-ups. */
export function wellFormed(name: string): string {
  return name.replace(LONE_SURROGATE, '\uFFFD');
}

export function openNames(db: Database): Names {
  const mixes = new Map<string, number>();
  const strands = new Map<number, Map<string, number>>();

  const categories = categoryBooks(db);
  const selectMix = db.prepare<[string], number>('SELECT id FROM mixes WHERE name = ?').pluck();
  const insertMix = db.prepare<[string]>('INSERT INTO mixes (name) VALUES (?)');
  const selectStrand = db
    .prepare<[number, string], number>('SELECT id FROM strands WHERE mix_id = ? AND name = ?')
    .pluck();
  const insertStrand = db.prepare<[number, string]>(
    'INSERT INTO strands (mix_id, name) VALUES (?, ?)',
  );
  function findMix(mix: string): number | null {
    const known = mixes.get(mix) ?? selectMix.get(mix);
    if (known === undefined) return null;
    mixes.set(mix, known);
    return known;
  }

  function findStrand(mixId: number, strand: string): number | null {
    const ofMix = strands.get(mixId) ?? new Map<string, number>();
    strands.set(mixId, ofMix);
    const known = ofMix.get(strand) ?? selectStrand.get(mixId, strand);
    if (known === undefined) return null;
    ofMix.set(strand, known);
    return known;
  }

  return {
    findMix,
    findStrand,
    mixId: (mix) => findMix(mix) ?? Number(insertMix.run(mix).lastInsertRowid),
    strandId: (mixId, strand) =>
      findStrand(mixId, strand) ?? Number(insertStrand.run(mixId, strand).lastInsertRowid),
    addCategories: categories.add,
    categories: categories.book,
    forget() {
      mixes.clear();
      strands.clear();
      categories.forget();
    },
  };
}

/** @param rows in code-point order of name */
function makeBook(rows: readonly { readonly id: number; readonly name: string }[]): CategoryBook {
  const idOf = new Map<string, number>();
  const names = new Array<string>(rows.length).fill('');
  const rank = new Array<number>(rows.length).fill(0);
  rows.forEach((row, place) => {
    idOf.set(row.name, row.id);
    names[row.id] = row.name;
    rank[row.id] = place;
  });
  return { idOf, names, rank };
}

/** Ids of categories, dense within a mix. */
function categoryBooks(db: Database): {
  add: Names['addCategories'];
  book: Names['categories'];
  forget(): void;
} {
  const books = new Map<number, CategoryBook>();
  const insertCategory = db.prepare<[number, string, number]>(
    `INSERT INTO categories (mix_id, id, name)
     SELECT ?, coalesce(max(id) + 1, 0), ? FROM categories WHERE mix_id = ?
     ON CONFLICT DO NOTHING`,
  );
  const selectCategories = db.prepare<[number], { id: number; name: string }>(
    'SELECT id, name FROM categories WHERE mix_id = ? ORDER BY name',
  );

  return {
    add(mixId, categories) {
      for (const category of categories) insertCategory.run(mixId, category, mixId);
      books.delete(mixId);
    },
    book(mixId, reload) {
      const known = reload === undefined ? books.get(mixId) : undefined;
      const book = known ?? makeBook(selectCategories.all(mixId));
      books.set(mixId, book);
      return book;
    },
    forget: () => books.clear(),
  };
}
