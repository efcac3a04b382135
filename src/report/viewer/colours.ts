/** Matte tones for parts: neighbours differ in lightness as well as hue, so they stay apart without colour vision. */
const tones = [
  "#5f7f86",
  "#c9b27c",
  "#8a5a44",
  "#a9bfae",
  "#4d5566",
  "#d7a48a",
  "#7a7f4f",
  "#b6b9c9",
  "#6d4f63",
  "#e0d6c2",
  "#3f6658",
  "#9b8f86",
];

/** The same part name has the same colour in every variant. */
export function partColours(names: string[]): Map<string, string> {
  return new Map([...new Set(names)].map((name, index) => [name, tones[index % tones.length]!]));
}

export const pickedColour = "#e2632b";
