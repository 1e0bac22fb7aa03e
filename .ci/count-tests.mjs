import { existsSync, readFileSync } from 'node:fs';

/**
 * Says how many tests passed and failed, by vitest's own report and the status with which it ended. A test
 * that was skipped counts as failed; so does a file that could not be run, an error outside of any test, and
 * a run that made no report or passed nothing.
 */
const [reportFile, exitStatus] = process.argv.slice(2);
const files = existsSync(reportFile)
  ? JSON.parse(readFileSync(reportFile, 'utf8')).testResults
  : [];
const count = (file, passed) =>
  file.assertionResults.filter((test) => (test.status === 'passed') === passed).length;
const sum = (numbers) => numbers.reduce((total, number) => total + number, 0);

const passed = sum(files.map((file) => count(file, true)));
const placed = sum(files.map((file) => count(file, false) || Number(file.status !== 'passed')));
const failed = placed || Number(exitStatus !== '0' || passed === 0);
process.stdout.write(`${passed} passed, ${failed} failed\n`);
process.exitCode = failed === 0 ? 0 : 1;
