/**
 * Prints the last line of a checking run, `N passed, N failed`, and exits 1 unless all passed.
 * Usage: node .ci/summary.mjs REPORT STATUS [REPORT STATUS ...], where REPORT is the test runner's
 * JSON report and STATUS the exit status of the whole run. A test file that could not be loaded,
 * and a run that broke before its first test or in which nothing passed, count as one failure each.
 */
import { existsSync, readFileSync } from 'node:fs';

const runs = process.argv.slice(2);

function countsOf(path) {
  if (!existsSync(path)) return { passed: 0, failed: 0, leftOut: 0 };
  const report = JSON.parse(readFileSync(path, 'utf8'));
  const failsIn = (file) => file.assertionResults.filter((test) => test.status === 'failed').length;
  const unloaded = report.testResults.filter((f) => f.status === 'failed' && failsIn(f) === 0);
  return {
    passed: report.numPassedTests,
    failed: report.numFailedTests + unloaded.length,
    leftOut: report.numPendingTests + report.numTodoTests,
  };
}

const total = { passed: 0, failed: 0, leftOut: 0 };
for (let at = 0; at < runs.length; at += 2) {
  const { passed, failed, leftOut } = countsOf(runs[at]);
  const broken = failed === 0 && (Number(runs[at + 1]) !== 0 || passed === 0) ? 1 : 0;
  total.passed += passed;
  total.failed += failed + broken;
  total.leftOut += leftOut;
}
if (total.leftOut > 0) console.log(`${total.leftOut} left out`);
console.log(`${total.passed} passed, ${total.failed} failed`);
process.exitCode = total.failed > 0 || total.passed === 0 ? 1 : 0;
