import { rmSync, mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { describe, expect, it, onTestFinished } from 'vitest';
import { openSqliteStore, type SqliteStore } from '../../../src/store/sqlite/open.js';
import type { Opened } from './opened.js';
import { storeContract } from './suite.js';
import { alert, batchOf, listOf, memory, MINUTE, round, T0, tally, verdict } from './values.js';

function newFolder(): string {
  return mkdtempSync(join(tmpdir(), 'tallyward-contract-'));
}

async function openFile(): Promise<Opened> {
  const folder = newFolder();
  const path = join(folder, 'var', 'store.db');
  let store = await openSqliteStore({ path });
  return {
    store,
    reopen: async () => {
      await store.close();
      return (store = await openSqliteStore({ path }));
    },
    cleanup: async () => {
      await store.close();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

async function openMemory(): Promise<Opened> {
  const store = await openSqliteStore({ path: ':memory:' });
  return { store, reopen: null, cleanup: () => store.close() };
}

storeContract('SQLite file', openFile);
storeContract('SQLite in-memory', openMemory);

/** A new file store, with a way to open further connections to it. */
async function fileWithReaders(): Promise<{
  path: string;
  store: SqliteStore;
  another: (options?: { readonly readOnly: boolean }) => Promise<SqliteStore>;
}> {
  const folder = newFolder();
  const path = join(folder, 'store.db');
  const opened = [await openSqliteStore({ path })];
  const another = async (options = { readOnly: true }): Promise<SqliteStore> => {
    const store = await openSqliteStore({ path, ...options });
    opened.unshift(store);
    return store;
  };
  onTestFinished(async () => {
    for (const store of opened) await store.close();
    rmSync(folder, { recursive: true, force: true });
  });
  const [store] = opened;
  if (store === undefined) throw new Error('no store was opened');
  return { path, store, another };
}

describe('a second connection to a SQLite file', () => {
  it('reads whole commits while the first goes on writing, with names new to it', async () => {
    const { store, another } = await fileWithReaders();
    await store.commitCounts(batchOf([tally(0, { b: 1 })]));
    const reader = await another();
    expect(await reader.windowTallies('m', T0)).toEqual([tally(0, { b: 1 })]);
    await store.commitCounts(batchOf([tally(0, { a: 2, c: 3 }), tally(0, { z: 1 }, { mix: 'n' })]));
    expect(await reader.windowTallies('m', T0)).toEqual([tally(0, { a: 2, b: 1, c: 3 })]);
    expect(await reader.windowTallies('n', T0)).toEqual([tally(0, { z: 1 }, { mix: 'n' })]);
  });

  it('does not hold up the writer while it streams', async () => {
    const { store, another } = await fileWithReaders();
    await store.commitCounts(batchOf([0, 1, 2].map((at) => tally(at, { x: 1 }))));
    const reader = await another();
    const seen: number[] = [];
    for await (const { window } of reader.tallies({ mix: 'm' })) {
      seen.push((window.startMs - T0) / MINUTE);
      await store.commitRound(round(seen.length, { verdicts: [verdict(seen.length)] }));
    }
    expect(seen).toEqual([0, 1, 2]);
    expect(await reader.latestVerdicts()).toEqual([verdict(3)]);
  });

  it('that writes too adds to the same tallies under the same names', async () => {
    const { store, another } = await fileWithReaders();
    const second = await another({ readOnly: false });
    await store.commitCounts(batchOf([tally(0, { a: 1 })]));
    await second.commitCounts(batchOf([tally(0, { b: 1 })]));
    await store.commitCounts(batchOf([tally(0, { c: 1, b: 1 })]));
    await second.commitCounts(batchOf([tally(0, { c: 1, a: 1 })]));
    expect(await store.windowTallies('m', T0)).toEqual([tally(0, { a: 2, b: 2, c: 2 })]);
  });
});

describe('copying tallies', () => {
  it('takes tallies and batches of a store in use, and leaves what judging said', async () => {
    const { path, store } = await fileWithReaders();
    const north = tally(1, { b: [1, 2] }, { strand: 'r=north' });
    await store.commitCounts(batchOf([tally(0, { z: 3, a: 4 }), north]));
    const state = { mix: 'm', strand: 'all', state: memory };
    const judged = { verdicts: [verdict(0)], alerts: [alert('a1')], strands: [state] };
    await store.commitRound(round(1, { batch: { ...round(1).batch, mixes: ['m', 'n'] } }));
    await store.commitRound(round(0, judged));

    const copy = await openSqliteStore({ path: ':memory:' });
    const batches = await copy.copyTalliesFrom(path);
    expect(batches).toEqual([round(0).batch, { ...round(1).batch, mixes: ['m', 'n'] }]);
    const tallies = await listOf(store.tallies({ mix: 'm' }));
    expect(await listOf(copy.tallies({ mix: 'm' }))).toEqual(tallies);
    expect(await copy.nextWindow('m', T0 + 1)).toEqual(north.window);
    expect((await copy.totals()).mixes).toEqual((await store.totals()).mixes);
    expect(await copy.judgedTo()).toEqual(new Map());
    expect(await copy.latestVerdicts()).toEqual([]);
    expect(await listOf(copy.verdicts({}))).toEqual([]);
    expect(await copy.alerts({})).toEqual([]);
    expect(await copy.strandStates()).toEqual([]);
    await copy.commitRound(round(0, judged));
    await store.commitCounts(batchOf([tally(0, { a: 1 })]));
    await copy.close();
  });

  it('refuses a store that has something, and a source that is not there', async () => {
    const { path, store } = await fileWithReaders();
    const copy = await openSqliteStore({ path: ':memory:' });
    await expect(copy.copyTalliesFrom(`${path}.not`)).rejects.toThrow(/there is no store/);
    await copy.commitCounts(batchOf([tally(0, { a: 1 })]));
    await expect(copy.copyTalliesFrom(path)).rejects.toThrow(/only be copied into an empty store/);
    expect(await listOf(store.tallies({ mix: 'm' }))).toEqual([]);
    await copy.close();
  });
});

describe('a damaged SQLite file', () => {
  it('is named with mix, strand and window when a tally cannot be read', async () => {
    const { path, store } = await fileWithReaders();
    await store.commitCounts(batchOf([tally(0, { a: 1 })]));
    const other = new Database(path);
    other.exec(`UPDATE tallies SET counts = x'0101'`);
    other.close();
    await expect(store.windowTallies('m', T0)).rejects.toThrow(
      `mix m, strand all, window from 2031-03-05T00:00:00.000Z in store ${path}: ` +
        'a stored tally is damaged: it is shorter than it says; put back the last backup',
    );
  });

  it('is named with mix, strand and window when evidence cannot be read', async () => {
    const { path, store } = await fileWithReaders();
    await store.commitRound(round(0, { verdicts: [verdict(0)] }));
    const other = new Database(path);
    other.exec(`UPDATE verdicts SET evidence = x'ffff'`);
    other.close();
    await expect(store.latestVerdicts()).rejects.toThrow(
      'the evidence of mix m, strand all, window to 2031-03-05T00:01:00.000Z is damaged',
    );
  });
});
