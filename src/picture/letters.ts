/**
 * Letters as strokes, for pictures that are drawn without any font of the machine. Every stroke is a list of points, two digits each:
 * x from 0, y from 0 at the height of capitals to 6 on the line and 8 at the lowest.
 */
const strokes: Record<string, string> = {
  "0": "103041453616050110",
  "1": "112026 1636",
  "2": "01103041420646",
  "3": "01103041423313 334445361605",
  "4": "36300444",
  "5": "400002324345361605",
  "6": "413010010516364544331304",
  "7": "004016",
  "8": "13020110304142331304051636454433",
  "9": "051636454130100102133342",
  A: "062046 1434",
  B: "003041423303 334445360600",
  C: "4130100105163645",
  D: "00204244260600",
  E: "40000646 0333",
  F: "400006 0333",
  G: "41301001051636454323",
  H: "0006 4046 0343",
  I: "1030 2026 1636",
  J: "3035261605",
  K: "0006 400346",
  L: "000646",
  M: "0600234046",
  N: "06004640",
  O: "103041453616050110",
  P: "06003041423303",
  Q: "103041453616050110 3446",
  R: "06003041423303 2346",
  S: "413010010213334445361605",
  T: "0040 2026",
  U: "000516364540",
  V: "002640",
  W: "0016233640",
  X: "0046 4006",
  Y: "002340 2326",
  Z: "00400646",
  a: "12223336 341405162635",
  b: "0006 0312223335261605",
  c: "3322120305162635",
  d: "3036 3322120305162635",
  e: "04343322120305162635",
  f: "30201116 0222",
  g: "3237281807 3322120305162635",
  h: "0006 0312223336",
  i: "0206 0000",
  j: "222718 2020",
  k: "0006 320436",
  l: "0006",
  m: "0206 03122326 23324346",
  n: "0206 0312223336",
  o: "122233352616050312",
  p: "0208 0312223335261605",
  q: "3238 3322120305162635",
  r: "0206 031222",
  s: "33221203142435261605",
  t: "101526 0222",
  u: "0205162635 3236",
  v: "022642",
  w: "0216233642",
  x: "0236 3206",
  y: "0226 4218",
  z: "02320636",
  ".": "0606",
  ",": "1607",
  ":": "0303 0606",
  ";": "1313 1607",
  "!": "0004 0606",
  "?": "01103041422324 2626",
  "'": "0002",
  '"': "0002 2022",
  "(": "20111526",
  ")": "00111506",
  "[": "20000626",
  "]": "00202606",
  "{": "20111203141526",
  "}": "00111223141506",
  "+": "0444 2226",
  "-": "0434",
  "=": "0343 0545",
  "/": "0640",
  "\\": "0046",
  "|": "0007",
  _: "0747",
  "*": "2125 1234 3214",
  "#": "1016 3036 0242 0444",
  "%": "0640 0101 4545",
  "&": "460211102021220304051626 2644",
  "<": "410345",
  ">": "014305",
  "@": "343222133435453042311003051646",
  "^": "022042",
  "`": "0011",
  "~": "04133443",
  $: "413010010213334445361605 2027",
};

export interface Glyph {
  /** lists of x y x y ..., units of a sixth of the height of capitals */
  strokes: number[][];
  /** to the beginning of the next letter */
  advance: number;
}

const glyphs = new Map<string, Glyph>(
  Object.entries(strokes).map(([letter, text]) => {
    const lists = text.split(" ").map((stroke) => [...stroke].map(Number));
    const width = Math.max(...lists.flatMap((list) => list.filter((_, at) => at % 2 === 0)));
    return [letter, { strokes: lists, advance: width + 1.7 }];
  }),
);
glyphs.set(" ", { strokes: [], advance: 2.6 });

/** A letter of printable ASCII; any other is a question mark. */
export const glyphOf = (letter: string): Glyph => glyphs.get(letter) ?? glyphs.get("?")!;

/** Pixels that a text takes; `size` is the height of capitals. */
export function textWidth(text: string, size: number): number {
  let units = 0;
  for (const letter of text) units += glyphOf(letter).advance;
  return ((units - (units > 0 ? 1.7 : 0)) * size) / 6;
}

/** A name from a file for people: no control or direction marks, no runs of blanks, no more than `most` letters. */
export function shownName(name: string, most = 36): string {
  const clean = name
    .slice(0, 16 * most)
    .replaceAll(/[\p{C}\p{Z}\s]+/gu, (run) => (/[\p{Z}\s]/u.test(run) ? " " : ""))
    .trim();
  const letters = [...clean];
  if (letters.length === 0) return "(no name)";
  return letters.length > most ? `${letters.slice(0, most - 3).join("")}...` : clean;
}
