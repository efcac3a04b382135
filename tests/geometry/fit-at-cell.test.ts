import { describe, expect, it } from "vitest";
import { fitSurveyed } from "../../src/geometry/fit-at-cell.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import type { Vector3 } from "../../src/geometry/vector.js";
import { bodyOf, box, joined, moved } from "./shapes.js";

const given = { unit: "mm", travel: "-x", up: "+z", cell: null } as const;
/** A box of walls 0.1 m thick about a room, in millimetres; without its lid where it is open. */
const inMillimetres = (shape: number[]) => moved(shape, (point) => point.map((value) => 1000 * value) as Vector3);
const room = (open: boolean) => {
  const skin = box([0, -0.8, 0], [3, 0.8, 1.2]);
  return bodyOf({ room: inMillimetres(open ? skin.slice(0, 90) : skin) });
};

describe("a body against cells, from its survey", () => {
  it("is shut or open, in metres whatever the file's unit", () => {
    const shut = room(false);
    expect(fitSurveyed(shut, surveyBody(shut, given), 0.05)).toMatchObject({
      leaks: [{ reached: false }, { reached: false }],
      findings: [],
    });
    const open = room(true);
    const { leaks, findings } = fitSurveyed(open, surveyBody(open, given), 0.05);
    expect(leaks.map(({ reached, cell }) => [reached, cell])).toEqual([
      [true, 50],
      [true, 25],
    ]);
    expect(findings.find(({ code }) => code === "leak")!.places[0]![2]).toBeCloseTo(1.2, 0);
  });

  it("proves a keep-point in the free air, and refuses one in the body or on its skin", () => {
    const body = room(false);
    const survey = surveyBody(body, given);
    const at = (...point: Vector3) => fitSurveyed(body, survey, 0.05, new Map(), point);
    expect(at(-8, 2, 4)).toMatchObject({ keepPoint: { proven: true, outside: true }, findings: [] });
    expect(at(1.5, 0, 0.6).findings).toMatchObject([
      { code: "keep-point-not-outside", severity: "error", places: [[1.5, 0, 0.6]] },
    ]);
    expect(at(-0.06, 0, 0.6).findings).toMatchObject([{ code: "keep-point-near-surface", severity: "error" }]);
  });

  it("takes each part's own cells", () => {
    const plate = box([0, -0.5, 0], [2, 0.5, 0.06]);
    const set = bodyOf({ plate: inMillimetres(plate), block: inMillimetres(joined(box([0, -0.5, 1], [2, 0.5, 2]))) });
    const survey = surveyBody(set, given);
    const codes = (cellOf: Map<string, number>) => fitSurveyed(set, survey, 0.05, cellOf).findings.map(({ code }) => code);
    expect(codes(new Map())).toContain("thin-part");
    expect(codes(new Map([["plate", 0.02]]))).not.toContain("thin-part");
  });
});
