// A vitest reporter whose only word is the closing line "N passed, N failed, N skipped", on stdout, without colour.
// Counted: every test; a file that could not be loaded (one failure); and each error nobody caught (one failure).

export default class PlainLine {
  /**
   * @param {ReadonlyArray<import("vitest/node").TestModule>} modules
   * @param {ReadonlyArray<unknown>} unhandled
   */
  onTestRunEnd(modules, unhandled) {
    let passed = 0;
    let failed = unhandled.length;
    let skipped = 0;
    for (const module of modules) {
      if (module.state() === "failed" && module.children.size === 0) failed++;
      for (const test of module.children.allTests()) {
        const state = test.result().state;
        if (state === "passed") passed++;
        else if (state === "failed") failed++;
        else skipped++;
      }
    }
    process.stdout.write(`\n${passed} passed, ${failed} failed, ${skipped} skipped\n`);
  }
}
