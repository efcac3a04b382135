import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { FloatText, shortestFloat32 } from "../../../src/geometry/files/float-text.js";

const sameFloat = (a: number, b: number): boolean => Object.is(Math.fround(a), Math.fround(b));

describe("shortestFloat32", () => {
  it.each([
    [0.1, "0.1"],
    [-1.25, "-1.25"],
    [16777216, "16777216"],
    [1e-7, "1e-7"],
    [1 / 3, "0.33333334"],
    [0, "0"],
    [-0, "-0"],
    [3.4028234663852886e38, "3.4028235e+38"],
    [2 ** -149, "1e-45"],
  ])("writes %s as %s", (value, expected) => {
    expect(shortestFloat32(Math.fround(value))).toBe(expected);
  });

  it("reads back the same, and one digit less does not", () => {
    fc.assert(
      fc.property(fc.float({ noNaN: true, noDefaultInfinity: true }), (value) => {
        const written = shortestFloat32(value);
        expect(sameFloat(Number(written), value)).toBe(true);
        const digits = written.replace(/e.*$/, "").replace(/[-.]/g, "").replace(/^0+/, "").replace(/0+$/, "").length;
        if (digits > 1) expect(Math.fround(Number(value.toPrecision(digits - 1)))).not.toBe(value);
      }),
      { seed: 20, numRuns: 2000 },
    );
  });
});

describe("FloatText", () => {
  const written = (write: (out: FloatText) => void): string => {
    const out = new FloatText();
    write(out);
    return Buffer.from(out.finish()).toString("utf8");
  };

  it("joins text, bytes and numbers, beyond its first size", () => {
    const long = "\u00e4".repeat(50_000);
    const result = written((out) => {
      out.text(long);
      out.byte(32);
      out.bytes(new TextEncoder().encode("x "));
      out.float32(0.5, 0x3f000000);
    });
    expect(result).toBe(`${long} x 0.5`);
  });

  it("writes floats as shortestFloat32 does, remembered or not, also when two share a place in the table", () => {
    // 70 000 different floats cannot all have a place of their own among 65 536; each is asked for twice.
    const values = Float32Array.from({ length: 70_000 }, (_, k) => Math.fround((k - 35_000) * 0.0371));
    const bits = new Int32Array(values.buffer);
    const result = written((out) => {
      for (let round = 0; round < 2; round++) {
        for (let k = 0; k < values.length; k++) {
          out.float32(values[k], bits[k]);
          out.byte(10);
        }
      }
    });
    const expected = [...values].map(shortestFloat32).join("\n");
    expect(result === `${expected}\n${expected}\n`).toBe(true);
  });

  it("keeps the sign of zero apart in the table", () => {
    const values = Float32Array.from([0, -0, 0]);
    const bits = new Int32Array(values.buffer);
    const result = written((out) => {
      for (let k = 0; k < values.length; k++) out.float32(values[k], bits[k]);
    });
    expect(result).toBe("0-00");
  });

  it.each([
    [0, "0"],
    [-1e-7, "0"],
    [1, "1"],
    [-1, "-1"],
    [0.9999999, "1"],
    [-0.05, "-0.05"],
    [0.123456789, "0.123457"],
    [1e-6, "0.000001"],
  ])("rounds %s to six decimals as %s", (value, expected) => {
    expect(written((out) => out.sixDecimals(value))).toBe(expected);
  });
});
