import { describe, expect, test } from "vitest";
import { bytes, duration, estimate, fixed, signed, significant, thousands } from "../src/number-text.js";

describe("numbers for people", () => {
  test("a minus zero is a zero, a missing number a dash", () => {
    expect(fixed(-0.00001, 4)).toBe("0.0000");
    expect(fixed(null, 2)).toBe("-");
    expect(fixed(Number.NaN, 2)).toBe("-");
    expect(fixed(Number.POSITIVE_INFINITY, 2)).toBe("inf");
  });

  test("a difference always has its sign", () => {
    expect(signed(0.0123, 3)).toBe("+0.012");
    expect(signed(-0.0123, 3)).toBe("-0.012");
    expect(signed(-0.00001, 3)).toBe("+0.000");
  });

  test("an estimate has its half-width when it is known", () => {
    expect(estimate({ value: 0.30123, halfWidth: 0.0008 }, 4)).toBe("0.3012 ± 0.0008");
    expect(estimate({ value: 0.30123, halfWidth: null }, 4)).toBe("0.3012 ± ?");
    expect(estimate(null, 4)).toBe("-");
  });

  test("significant digits stay readable over many sizes", () => {
    expect([0, 1234567, 12345678, 0.00012346, 0.000012341, -2.5].map((x) => significant(x))).toEqual([
      "0",
      "1235000",
      "1.235e+7",
      "0.0001235",
      "1.234e-5",
      "-2.5",
    ]);
  });

  test("counts, durations and sizes", () => {
    expect(thousands(1234567)).toBe("1 234 567");
    expect([5, 65, 3700].map(duration)).toEqual(["5 s", "1 min 5 s", "1 h 2 min"]);
    expect(bytes(3 * 2 ** 20)).toBe("3.0 MiB");
  });
});
