const words = [
  "solid",
  "endsolid x",
  "facet normal",
  "vertex",
  "outer loop",
  "endloop",
  "endfacet",
  "nan",
  "-inf",
  "1e999",
  "1e-999",
  "9".repeat(400),
  "\0\0\0\0",
  "\n\n\n",
  "\r",
  "f 1 2 99999999999",
  "f -1 -1",
  "v 1e38 1e38 1e38",
  "g \u001b[2J",
  "\\\n",
  "solid ../../../etc/passwd",
  "ÿþ",
  "\u202e",
  "#calc #codeStream",
  " ".repeat(3000),
];

/** One to four changes: a cut, flipped bytes, a word put in, a stretch doubled, moved or set to one value. */
export function broken(source: Buffer, next: () => number): Buffer {
  let bytes = Buffer.from(source);
  const at = (): number => Math.floor(next() * (bytes.length + 1));
  for (let changes = 1 + Math.floor(4 * next()); changes > 0; changes--) {
    const [from, to] = [at(), at()].sort((a, b) => a - b);
    switch (Math.floor(7 * next())) {
      case 0:
        bytes = bytes.subarray(0, from);
        break;
      case 1:
        for (let k = 0; k < 1 + 8 * next() && bytes.length > 0; k++)
          bytes[Math.floor(next() * bytes.length)] ^= 1 << Math.floor(8 * next());
        break;
      case 2:
        bytes = Buffer.concat([
          bytes.subarray(0, from),
          Buffer.from(words[Math.floor(next() * words.length)]),
          bytes.subarray(from),
        ]);
        break;
      case 3:
        bytes = Buffer.concat([bytes.subarray(0, to), bytes.subarray(from)]);
        break;
      case 4:
        bytes = Buffer.concat([bytes.subarray(0, from), bytes.subarray(to)]);
        break;
      case 5:
        bytes = Buffer.concat([bytes.subarray(to), bytes.subarray(0, from)]);
        break;
      default:
        bytes = Buffer.from(bytes.fill(Math.floor(256 * next()), from, Math.min(to, from + 64)));
    }
  }
  return bytes;
}
