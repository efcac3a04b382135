import type { PartMesh } from "./unpack.js";

/** The body without WebGL: triangles sorted by depth and filled, seen from ahead, right and above. */
export function drawStill(canvas: HTMLCanvasElement, parts: PartMesh[], colours: Map<string, string>): void {
  const context = canvas.getContext("2d");
  if (!context) return;
  canvas.width = 1280;
  canvas.height = 800;
  const yaw = (-145 * Math.PI) / 180;
  const pitch = (22 * Math.PI) / 180;
  const [cy, sy, cp, sp] = [Math.cos(yaw), Math.sin(yaw), Math.cos(pitch), Math.sin(pitch)];
  const triangles: { depth: number; light: number; colour: string; points: number[] }[] = [];
  let [left, right, low, high] = [
    Number.POSITIVE_INFINITY,
    Number.NEGATIVE_INFINITY,
    Number.POSITIVE_INFINITY,
    Number.NEGATIVE_INFINITY,
  ];
  for (const { name, vertices, indices } of parts) {
    const seen = new Float32Array(vertices.length);
    for (let v = 0; v < vertices.length; v += 3) {
      const [x, y, z] = [vertices[v]!, vertices[v + 1]!, vertices[v + 2]!];
      const across = -sy * x + cy * y;
      const away = cy * x + sy * y;
      seen[v] = across;
      seen[v + 1] = cp * z - sp * away;
      seen[v + 2] = cp * away + sp * z;
      left = Math.min(left, across);
      right = Math.max(right, across);
      low = Math.min(low, seen[v + 1]!);
      high = Math.max(high, seen[v + 1]!);
    }
    for (let t = 0; t < indices.length; t += 3) {
      const points = [0, 1, 2].flatMap((k) => [
        seen[3 * indices[t + k]!]!,
        seen[3 * indices[t + k]! + 1]!,
        seen[3 * indices[t + k]! + 2]!,
      ]);
      const [ax, ay, bx, by, cx, cy2] = [points[0]!, points[1]!, points[3]!, points[4]!, points[6]!, points[7]!];
      const area = (bx - ax) * (cy2 - ay) - (by - ay) * (cx - ax);
      const size = Math.hypot(area, 1e-9);
      triangles.push({
        depth: points[2]! + points[5]! + points[8]!,
        light: 0.55 + 0.45 * Math.min(1, Math.abs(area) / size),
        colour: colours.get(name) ?? "#888888",
        points: [ax, ay, bx, by, cx, cy2],
      });
    }
  }
  triangles.sort((a, b) => a.depth - b.depth);
  const scale = 0.9 * Math.min(canvas.width / (right - left), canvas.height / (high - low));
  const place = (x: number, y: number): [number, number] => [
    canvas.width / 2 + scale * (x - (left + right) / 2),
    canvas.height / 2 - scale * (y - (low + high) / 2),
  ];
  for (const { points, colour, light } of triangles) {
    context.beginPath();
    context.moveTo(...place(points[0]!, points[1]!));
    context.lineTo(...place(points[2]!, points[3]!));
    context.lineTo(...place(points[4]!, points[5]!));
    context.closePath();
    context.fillStyle = colour;
    context.globalAlpha = light;
    context.fill();
  }
  context.globalAlpha = 1;
}
