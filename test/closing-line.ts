import type { Reporter, TestModule } from 'vitest/node';

/** Ends the test run with one plain line of counts, for build servers that read it. */
export default class ClosingLine implements Reporter {
  onTestRunEnd(modules: readonly TestModule[]): void {
    const counts = { passed: 0, failed: 0, skipped: 0, pending: 0 };
    for (const module of modules) {
      for (const test of module.children.allTests()) counts[test.result().state]++;
      // A file that cannot be loaded holds no test that could fail.
      if (module.errors().length > 0) counts.failed++;
    }
    console.log(`${counts.passed} passed, ${counts.failed} failed, ${counts.skipped} skipped`);
  }
}
