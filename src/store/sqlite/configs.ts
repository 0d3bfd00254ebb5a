import type { Store } from '../store.js';
import type { Session } from './session.js';

/** Ids that stand for configuration digests; gives one to a new digest (when writing). */
export function configIds({ db }: Session): (digest: string) => number {
  const insert = db.prepare<[string]>(
    'INSERT INTO configs (digest) VALUES (?) ON CONFLICT DO NOTHING',
  );
  const select = db.prepare<[string], number>('SELECT id FROM configs WHERE digest = ?').pluck();
  return (digest) => {
    const known = select.get(digest);
    return known ?? Number(insert.run(digest).lastInsertRowid);
  };
}

export function configMethods(session: Session): Pick<Store, 'keepConfig' | 'configText'> {
  // The text that came first stays: verdicts that name the digest were made with it.
  const keep = session.db.prepare<[string, string]>(
    `INSERT INTO configs (digest, text) VALUES (?, ?)
     ON CONFLICT (digest) DO UPDATE SET text = excluded.text WHERE text IS NULL`,
  );
  const select = session.db
    .prepare<[string], string | null>('SELECT text FROM configs WHERE digest = ?')
    .pluck();
  return {
    keepConfig: (digest, text) =>
      session.write('keep the configuration', () => void keep.run(digest, text)),
    configText: (digest) => session.read('read a configuration', () => select.get(digest) ?? null),
  };
}
