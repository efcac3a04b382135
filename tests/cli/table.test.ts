import { describe, expect, test } from "vitest";
import { csv, markdown, table } from "../../cli/print/table.js";

describe("tables", () => {
  test("columns stand under their titles, numbers right, no frames and no trailing blanks", () => {
    const text = table(
      [{ title: "part" }, { title: "Cd", align: "right" }],
      [
        ["cab", "0.1"],
        ["tailgate", "-0.0123"],
      ],
    );
    expect(text).toBe(["part           Cd", "cab           0.1", "tailgate  -0.0123"].join("\n"));
  });

  test("CSV quotes what needs it and disarms what a spreadsheet would run (RFC 4180)", () => {
    expect(
      csv(
        ["part", "Cd"],
        [
          ['a "b", c', 0.25],
          ["=1+1", null],
          ["-wing", Number.NaN],
        ],
      ),
    ).toBe('part,Cd\r\n"a ""b"", c",0.25\r\n\'=1+1,\r\n\'-wing,\r\n');
  });

  test("Markdown escapes bars", () => {
    expect(markdown([{ title: "part" }, { title: "Cd", align: "right" }], [["a|b", "0.1"]])).toBe(
      "| part | Cd |\n| :-- | --: |\n| a\\|b | 0.1 |\n",
    );
  });
});
