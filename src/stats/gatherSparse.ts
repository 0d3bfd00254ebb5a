/** How categories were gathered into bins. Numbers are indices of the categories given. */
export interface Pooling {
  /**
   * Nominal: one array for each kept category, in category order, the pooled bin last.
   * Ordered: runs of neighbours.
   */
  readonly bins: readonly (readonly number[])[];
  /** Nominal: the members of the pooled bin. Ordered: all that share a bin with another. */
  readonly pooled: readonly number[];
}

interface Sparse {
  readonly expected: readonly number[];
  /** Categories without an event or a share: no company for them, no bin. */
  readonly isEmpty: readonly boolean[];
  readonly minExpected: number;
  readonly ordered: boolean;
}

/** The gathering itself, shared by `poolByMargins` and `poolDeclared`. */
export function gatherSparse(sparse: Sparse): Pooling {
  return sparse.ordered ? gatherNeighbours(sparse) : gatherRest(sparse);
}

/**
 * Empty categories go with the other rare ones. When nothing but empty categories is left over
 * there is nothing to pool: they stay outside every bin, so that no kept category is hidden
 * for their sake.
 */
function gatherRest({ expected, isEmpty, minExpected }: Sparse): Pooling {
  const all = expected.map((_, k) => k);
  const kept = all.filter((k) => at(expected, k) >= minExpected);
  const rare = all.filter((k) => at(expected, k) < minExpected);
  if (rare.every((k) => isEmpty[k])) return { bins: kept.map((k) => [k]), pooled: [] };
  const rareExpected = rare.reduce((total, k) => total + at(expected, k), 0);
  if (rareExpected < minExpected && kept.length > 0) {
    const smallest = kept.reduce((best, k) => (at(expected, k) < at(expected, best) ? k : best));
    kept.splice(kept.indexOf(smallest), 1);
    rare.push(smallest);
    rare.sort((a, b) => a - b);
  }
  return { bins: [...kept.map((k) => [k]), rare], pooled: rare };
}

function gatherNeighbours({ expected, minExpected }: Sparse): Pooling {
  const bins = expected.map((_, k) => [k]);
  const sizes = [...expected];
  while (bins.length > 1) {
    const least = indexOfLeast(sizes);
    if (at(sizes, least) >= minExpected) break;
    const below = sizes[least - 1] ?? Infinity;
    const above = sizes[least + 1] ?? Infinity;
    const left = below <= above ? least - 1 : least;
    const merged = [...(bins[left] ?? []), ...(bins[left + 1] ?? [])];
    bins.splice(left, 2, merged);
    sizes.splice(left, 2, at(sizes, left) + at(sizes, left + 1));
  }
  return { bins, pooled: bins.filter((bin) => bin.length > 1).flat() };
}

function indexOfLeast(sizes: readonly number[]): number {
  let least = 0;
  sizes.forEach((size, k) => {
    if (size < at(sizes, least)) least = k;
  });
  return least;
}

function at(values: readonly number[], k: number): number {
  return values[k] ?? 0;
}
