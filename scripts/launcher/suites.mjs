export const SUITES = ["typecheck", "lint", "pure", "integration", "build", "browser"];

/** The suite that a test file belongs to, by its folder. */
function suiteOf(filter) {
  if (/tests\/browser/.test(filter)) return "browser";
  if (/tests\/(integration|faults)/.test(filter)) return "integration";
  if (/tests\/(unit|standards)/.test(filter)) return "pure";
  return undefined;
}

/**
 * What to run. Names of suites choose suites; other words are file filters, and without a suite
 * they choose the one they lie in; from the first dash on everything goes to the runner.
 *
 * @param {string[]} args
 */
export function readArguments(args) {
  const firstOption = args.findIndex((arg) => arg.startsWith("-"));
  const words = firstOption === -1 ? args : args.slice(0, firstOption);
  const passedOn = firstOption === -1 ? [] : args.slice(firstOption);
  const named = SUITES.filter((suite) => words.includes(suite));
  const filters = words.filter((word) => !SUITES.includes(word));
  const places = filters.map(suiteOf);
  const byFilter = filters.length === 0 ? SUITES : SUITES.filter((suite) => places.includes(suite) || (places.includes(undefined) && (suite === "pure" || suite === "integration")));
  return { suites: named.length > 0 ? named : byFilter, filters, passedOn };
}

/**
 * Counts what vitest reported. A file that could not even be loaded, and a run that failed
 * without naming a test, count as one failure each.
 *
 * @param {object | undefined} report its JSON, undefined when it wrote none
 * @param {number | null} code its exit code
 */
export function vitestCount(report, code) {
  if (!report) return { passed: 0, failed: 1, skipped: 0 };
  const brokenFiles = report.testResults.filter(({ status, assertionResults }) => status === "failed" && !assertionResults.some((one) => one.status === "failed")).length;
  const failed = report.numFailedTests + brokenFiles;
  return { passed: report.numPassedTests, failed: failed === 0 && code !== 0 ? 1 : failed, skipped: (report.numPendingTests ?? 0) + (report.numTodoTests ?? 0) };
}

/** Counts what Playwright reported, in the same way. A test that passed at a second try failed. */
export function playwrightCount(report, code) {
  if (!report) return { passed: 0, failed: 1, skipped: 0 };
  const { expected, unexpected, flaky, skipped } = report.stats;
  const failed = unexpected + flaky + (unexpected === 0 ? report.errors.length : 0);
  return { passed: expected, failed: failed === 0 && code !== 0 ? 1 : failed, skipped };
}
