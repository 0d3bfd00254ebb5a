/**
 * Prints the last line of a checking run, `N passed, N failed`, and exits 1 unless all passed.
 * Usage: node .ci/summary.mjs REPORT STATUS, where REPORT is the test runner's JSON report and
 * STATUS the exit status of the whole run. A test file that could not be loaded, and a run that
 * broke before its first test, count as one failure each.
 */
import { existsSync, readFileSync } from 'node:fs';

const [reportPath, statusText] = process.argv.slice(2);

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

const { passed, failed, leftOut } = countsOf(reportPath);
const broken = failed === 0 && Number(statusText) !== 0 ? 1 : 0;
if (leftOut > 0) console.log(`${leftOut} left out`);
console.log(`${passed} passed, ${failed + broken} failed`);
process.exitCode = failed + broken > 0 || passed === 0 ? 1 : 0;
