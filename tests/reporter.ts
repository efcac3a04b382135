import { DefaultReporter } from "vitest/node";

/** The default report, then what was skipped and why, then one line that any machine can read. */
export default class ClosingReporter extends DefaultReporter {
  override onTestRunEnd(...args: Parameters<DefaultReporter["onTestRunEnd"]>): void {
    super.onTestRunEnd(...args);
    let passed = 0;
    let failed = args[1].length;
    const skipped: string[] = [];
    for (const file of args[0]) {
      // A file that cannot be loaded has no tests to count, yet it is a failure.
      if (file.errors().length > 0) failed += 1;
      for (const test of file.children.allTests()) {
        const result = test.result();
        if (result.state === "passed") passed += 1;
        else if (result.state === "failed") failed += 1;
        else skipped.push(`${test.fullName}${result.state === "skipped" && result.note ? `: ${result.note}` : ""}`);
      }
    }
    for (const line of skipped) console.log(`skipped: ${line}`);
    console.log(`${passed} passed, ${failed} failed`);
  }
}
