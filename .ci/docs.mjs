/**
 * Rewrites what is generated from the configuration's schema: config/schema.json and the README's
 * table between its two markers. Needs a build. Run it by `npm run docs`; test/tidy/docs.test.ts
 * fails while it is due.
 */
import { readFileSync, writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { jsonSchema, referenceTable } from '../dist/config/reference.js';

const at = (path) => fileURLToPath(new URL(`../${path}`, import.meta.url));
const block = /(<!-- reference:start -->\n)[\s\S]*?(<!-- reference:end -->)/;

function withTable(readme) {
  const table = referenceTable().trimEnd();
  return readme.replace(block, (_, start, end) => `${start}${table}\n${end}`);
}

const readme = readFileSync(at('README.md'), 'utf8');
if (block.test(readme)) {
  writeFileSync(at('README.md'), withTable(readme));
  writeFileSync(at('config/schema.json'), `${JSON.stringify(jsonSchema(), null, 2)}\n`);
} else {
  console.error('README.md lacks <!-- reference:start --> and <!-- reference:end -->; add them');
  process.exitCode = 2;
}
