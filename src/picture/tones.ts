/**
 * Colours of the body, shared by the pictures drawn in Node and the viewer. Matte tones for parts: neighbours differ in lightness as well
 * as in hue, so that they stay apart without colour vision.
 */
export const partTones: readonly string[] = [
  "#6b8a8f",
  "#d8c391",
  "#93624b",
  "#b4c8b8",
  "#565e70",
  "#dca98d",
  "#868b58",
  "#bfc2d1",
  "#7a5a70",
  "#e6dcc8",
  "#4b7364",
  "#a69a90",
];

export const toneOf = (index: number): string => partTones[index % partTones.length]!;

/** A part that is picked, and the ink of outlines. */
export const pickedTone = "#e2632b";
export const inkTone = "#2b3134";

/** Ends and middle of the scale of drag differences: less, none, more. */
export const differenceTones = { less: "#1f6f9e", none: "#ddd8cc", more: "#b4581c" } as const;

/** Red, green, blue 0..255 of `#rrggbb`. */
export const channels = (colour: string): [number, number, number] => {
  const value = Number.parseInt(colour.slice(1), 16);
  return [value >> 16, (value >> 8) & 255, value & 255];
};

/** Colour of a drag difference on the scale from -largest to largest; null is drawn as no difference. */
export function differenceTone(delta: number | null, largest: number): string {
  if (delta === null || largest === 0) return differenceTones.none;
  const share = Math.min(1, Math.abs(delta) / largest);
  const [from, to] = [channels(differenceTones.none), channels(delta < 0 ? differenceTones.less : differenceTones.more)];
  return `#${from
    .map((value, k) =>
      Math.round(value + share * (to[k]! - value))
        .toString(16)
        .padStart(2, "0"),
    )
    .join("")}`;
}

/** Findings by severity: dark enough for white figures on them, apart in lightness too. */
export const severityTones = { error: "#a8321a", warning: "#84600a", note: "#1f5f8a" } as const;
