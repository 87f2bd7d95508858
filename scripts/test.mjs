// `npm test`: everything that must hold, from an empty clone. `--quick` leaves the browser out.
// Ends with one line that counts: "N passed, N failed".
import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { ensureInstalled, ensureServerBuilt, ensureWebBuilt, quietExpo, root } from './lib.mjs';

const quick = process.argv.includes('--quick');
const env = { ...process.env, ...quietExpo, CI: '1' };
const scratch = mkdtempSync(join(tmpdir(), 'turnmark-test-'));
let passed = 0;
let failed = 0;

function step(name, action) {
  const startedMs = Date.now();
  console.log(`\n== ${name}`);
  let outcome;
  try {
    outcome = action();
  } catch (error) {
    console.error(error.message);
    outcome = { passed: 0, failed: 1 };
  }
  passed += outcome.passed;
  failed += outcome.failed;
  console.log(
    `== ${name}: ${outcome.failed === 0 ? 'passed' : 'FAILED'} (${((Date.now() - startedMs) / 1000).toFixed(0)} s)`,
  );
}

function command(name, program, args) {
  step(name, () => {
    const done = spawnSync(program, args, { cwd: root, env, stdio: 'inherit' });
    return done.status === 0 ? { passed: 1, failed: 0 } : { passed: 0, failed: 1 };
  });
}

/** Runs a test runner that writes a JSON report, and counts from the report. */
function suite(name, args, report, count) {
  step(name, () => {
    const file = join(scratch, report);
    const done = spawnSync('npx', args(file), {
      cwd: root,
      env: { ...env, PLAYWRIGHT_JSON_OUTPUT_NAME: file },
      stdio: 'inherit',
    });
    if (!existsSync(file)) return { passed: 0, failed: 1 };
    const outcome = count(JSON.parse(readFileSync(file, 'utf8')));
    if (done.status !== 0 && outcome.failed === 0) outcome.failed = 1;
    if (outcome.passed === 0) outcome.failed += 1;
    return outcome;
  });
}

function ensureChromium() {
  if (existsSync('/usr/bin/chromium')) return;
  console.log('Installing Chromium for the browser tests …');
  const apt = (...args) =>
    spawnSync('apt-get', args, {
      stdio: ['ignore', 'ignore', 'inherit'],
      env: { ...env, DEBIAN_FRONTEND: 'noninteractive' },
    });
  apt('update', '-qq');
  apt('install', '-y', '-qq', 'chromium');
  if (!existsSync('/usr/bin/chromium'))
    throw new Error('Chromium is needed at /usr/bin/chromium: apt-get install chromium');
}

ensureInstalled();
command('formatting', 'npx', ['prettier', '--check', '--log-level', 'warn', '.']);
command('lint', 'npx', ['eslint', '.', '--max-warnings', '0']);
command('import arrows', process.execPath, ['scripts/check-arrows.mjs']);
step('build', () => {
  ensureServerBuilt();
  ensureWebBuilt();
  return { passed: 1, failed: 0 };
});
command('types of the hub', 'npx', ['tsc', '-p', 'tsconfig.node.json']);
command('types of the app', 'npx', ['tsc', '-p', 'tsconfig.json']);
suite(
  'unit, reference and integration tests',
  (file) => ['vitest', 'run', '--reporter=dot', '--reporter=json', `--outputFile.json=${file}`],
  'vitest.json',
  (report) => ({ passed: report.numPassedTests, failed: report.numFailedTests + report.numFailedTestSuites }),
);
if (!quick) {
  step('Chromium', () => {
    ensureChromium();
    return { passed: 1, failed: 0 };
  });
  suite(
    'journeys in the browser',
    () => ['playwright', 'test', '-c', 'tests/e2e/playwright.config.ts', '--reporter=list,json'],
    'playwright.json',
    (report) => ({ passed: report.stats.expected, failed: report.stats.unexpected + report.stats.flaky }),
  );
}
rmSync(scratch, { recursive: true, force: true });
console.log(`\n${passed} passed, ${failed} failed`);
process.exit(failed === 0 ? 0 : 1);
