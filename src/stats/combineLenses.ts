import { requireLogP } from './requireLogP.js';

export interface CombinedLenses {
  /** log of min(1, 2 min(p1, p2)); null when neither lens was there to look. */
  readonly logP: number | null;
  /** The lens that the result is owed to; the omnibus test where both say the same. */
  readonly lens: 'omnibus' | 'category' | null;
  /** log of min(1, K' min p_k) over the K' categories looked at; null when there were none. */
  readonly categoryLogP: number | null;
  /** Which of the categories given has the smallest p, the first of equals; null as above. */
  readonly category: number | null;
}

/**
 * One p-value from the test of the whole mix and the tests of its single categories.
 *
 * Bonferroni twice: p2 = min(1, K' min p_k) over the categories, then min(1, 2 min(p1, p2)) over
 * the two lenses. A lens that was not run counts as p = 1; the factor 2 stays, so that the level
 * does not depend on which of them could be run.
 *
 * In: omnibus, the natural log of its p-value (<= 0, -Infinity allowed) or null when not run;
 * categories, those of every category looked at, in category order (moderated t and rare tails
 * together). Out: see `CombinedLenses`; never p = 1 for "no test". Refuses other input with
 * RangeError. Source: Bonferroni's inequality; the combination is own. Cost: linear.
 */
export function combineLenses(input: {
  readonly omnibus: number | null;
  readonly categories: readonly number[];
}): CombinedLenses {
  const { omnibus, categories } = input;
  if (omnibus !== null) requireLogP('omnibus', omnibus);
  categories.forEach((logP, index) => {
    requireLogP(`categories[${index}]`, logP);
  });
  const category = indexOfLeast(categories);
  if (omnibus === null && category === null) {
    return { logP: null, lens: null, categoryLogP: null, category: null };
  }
  const least = category === null ? 0 : (categories[category] ?? 0);
  const categoryLogP = Math.min(0, least + Math.log(Math.max(1, categories.length)));
  const byOmnibus = category === null || (omnibus !== null && omnibus <= categoryLogP);
  const logP = Math.min(0, Math.LN2 + Math.min(omnibus ?? 0, categoryLogP));
  return {
    logP,
    lens: byOmnibus ? 'omnibus' : 'category',
    categoryLogP: category === null ? null : categoryLogP,
    category,
  };
}

function indexOfLeast(values: readonly number[]): number | null {
  let least: number | null = null;
  values.forEach((value, index) => {
    if (least === null || value < (values[least] ?? 0)) least = index;
  });
  return least;
}
