import { test } from 'vitest';
import { exactTable } from '../../../src/stats/exactTable.js';
test('x', () => {
  const tabs = [ [[60,50,40,22,18,17],[45,58,35,16,24,12]], [[31,27,22,19,13,11,9,7,5,3,2],[27,29,18,25,9,14,6,9,2,5,4]] ];
  for (const table of tabs) { for (const w of [1e6,3e6]) { const t0=performance.now(); const r = exactTable({table, maxWork: w}); console.log(JSON.stringify(r), performance.now()-t0, process.memoryUsage().rss/1e6); } }
});
