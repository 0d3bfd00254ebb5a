import { expect, it } from 'vitest';
import type { Verdict } from '../../../src/terms/verdict.js';
import { begin, restarted, type Open } from './opened.js';
import { evidence, listOf, MINUTE, round, T0, verdict } from './values.js';

const place = ({ mix, strand, window }: Verdict): string =>
  `${(window.endMs - T0) / MINUTE} ${mix} ${strand}`;

export function verdictsContract(open: Open): void {
  it('gives evidence back number by number, infinite ones included', async () => {
    const opened = await begin(open);
    const judged = verdict(0, { verdict: 'shifted', evidence, reason: 'moved “füllt” by 20 %' });
    await opened.store.commitRound(round(0, { verdicts: [judged] }));
    const store = await restarted(opened);
    expect(await listOf(store.verdicts({}))).toEqual([judged]);
    expect(await store.latestVerdicts()).toEqual([judged]);
  });

  it('streams verdicts in order of end, mix and strand, within the span asked for', async () => {
    const { store } = await begin(open);
    const names = [
      ['n', 'all'],
      ['m', 'r=\u{1f642}'],
      ['m', 'r=\uff5e'],
      ['m', 'all'],
    ] as const;
    for (const at of [1, 0, 2]) {
      const verdicts = names.map(([mix, strand]) => verdict(at, { mix, strand }));
      await store.commitRound(round(at, { verdicts }));
    }
    const strands = ['m all', 'm r=\uff5e', 'm r=\u{1f642}', 'n all'];
    const expected = [1, 2, 3].flatMap((end) => strands.map((strand) => `${end} ${strand}`));
    const places = async (query: Parameters<typeof store.verdicts>[0]): Promise<string[]> =>
      (await listOf(store.verdicts(query))).map(place);
    expect(await places({})).toEqual(expected);
    expect(await places({ mix: 'n' })).toEqual(['1 n all', '2 n all', '3 n all']);
    expect(await places({ mix: 'none' })).toEqual([]);
    const middle = { fromMs: T0 + MINUTE, toMs: T0 + 2 * MINUTE };
    expect(await places(middle)).toEqual(expected.slice(4, 8));
    expect(await places({ ...middle, fromMs: T0 + MINUTE + 1 })).toEqual([]);
    expect(await places({ ...middle, toMs: T0 + 2 * MINUTE - 1 })).toEqual([]);
  });

  it('streams more verdicts of one round than it reads at once, while others come', async () => {
    const { store } = await begin(open);
    const name = (i: number): string => `r=${String(i).padStart(4, '0')}`;
    const verdicts = Array.from({ length: 1_000 }, (_, i) => verdict(0, { strand: name(i) }));
    await store.commitRound(round(0, { verdicts }));
    const seen: string[] = [];
    for await (const found of store.verdicts({ mix: 'm' })) {
      if (seen.length === 0) await store.commitRound(round(1, { verdicts: [verdict(1)] }));
      seen.push(found.strand);
    }
    expect(seen).toEqual([...verdicts.map((found) => found.strand), 'all']);
  });

  it('knows the last verdict of every strand, but not of forgotten ones', async () => {
    const { store } = await begin(open);
    const strands = ['all', 'r=a', 'r=b'];
    const at = (window: number, some = strands): Verdict[] =>
      some.map((strand) => verdict(window, { strand, events: window }));
    await store.commitRound(round(0, { verdicts: at(0) }));
    await store.commitRound(round(2, { verdicts: at(2, ['r=b', 'all']) }));
    await store.commitRound(round(1, { verdicts: at(1) }));
    const latest = (await store.latestVerdicts()).map(place);
    expect(latest).toEqual(['3 m all', '2 m r=a', '3 m r=b']);
    await store.commitRound(round(3, { forgotten: [{ mix: 'm', strand: 'r=a' }] }));
    expect((await store.latestVerdicts()).map(place)).toEqual(['3 m all', '3 m r=b']);
    await store.commitRound(round(4, { verdicts: at(4, ['r=a']) }));
    expect((await store.latestVerdicts()).map(place)).toContain('5 m r=a');
  });

  it('counts verdicts by mix and name, and has the numbers after a restart', async () => {
    const opened = await begin(open);
    const [thin, other] = [verdict(0, { verdict: 'thin' }), verdict(0, { mix: 'a' })];
    await opened.store.commitRound(round(0, { verdicts: [thin, other] }));
    await opened.store.commitRound(round(1, { verdicts: [verdict(1)] }));
    await opened.store.commitRound(round(2, { verdicts: [verdict(2)] }));
    expect((await (await restarted(opened)).totals()).verdicts).toEqual([
      { mix: 'a', verdict: 'steady', count: 1 },
      { mix: 'm', verdict: 'steady', count: 2 },
      { mix: 'm', verdict: 'thin', count: 1 },
    ]);
  });
}
