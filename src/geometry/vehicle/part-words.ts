/** What the name of a part says about where it sits and what it is. English shop words, their usual abbreviations, any style of writing. */
export interface NameHints {
  wheel: boolean;
  /** front, rear, or null where the name does not say (or says both) */
  end: "front" | "rear" | null;
}

const frontWords = new Set(["front", "frt", "fr", "fl", "lf", "rf", "fwd", "forward"]);
const rearWords = new Set(["rear", "rr", "rl", "lr", "back", "aft"]);
/** Parts that sit at one end of nearly every vehicle; a plain "front" or "rear" in the name outweighs them. */
const frontParts = /^(hood|bonnet|nose|nosecone|grille?|headl(ight|amp)s?|windshield|windscreen|splitter|radiator|cowl|airdam)$/;
const rearParts =
  /^(tail|tailgate|taill(ight|amp)s?|trunk|trunklid|boot|bootlid|hatch|diffuser|exhaust|tailpipe|bed|bedcover|decklid)$/;

/** Words that hold "wheel" or the like and yet do not turn on an axle. */
const stillParts =
  /arch|house|housing|well|liner|steering|spare|carrier|fairing|deflector|opening|guard|cover|cutout|cavity|spat|pants|base|cut-?out/;

/** Splits a name at everything that is no letter, and at capitals inside a word: `FrontWheel_L` gives front, wheel, l. */
const wordsOf = (name: string): string[] =>
  name
    .normalize("NFKD")
    .replace(/(\p{Ll})(\p{Lu})/gu, "$1 $2")
    .toLowerCase()
    .split(/[^a-z]+/)
    .filter((word) => word !== "");

const isWheelWord = (word: string): boolean =>
  /wheels?$|^wheels?|tyres?$|^tyres?|^tires?$|^rims?$|(front|rear)tires?$|^wh$/.test(word) ||
  /^(wheel|tyre|tire|rim)(fl|fr|rl|rr|lf|rf|lr)$/.test(word);

export function nameHints(name: string): NameHints {
  const words = wordsOf(name);
  const wheel = words.some(isWheelWord) && !words.some((word) => stillParts.test(word));
  const says = (set: Set<string>, parts: RegExp): { plain: boolean; part: boolean } => ({
    plain: words.some((word) => set.has(word) || (isWheelWord(word) && [...set].some((end) => sticksTo(word, end)))),
    part: words.some((word) => parts.test(word)),
  });
  const front = says(frontWords, frontParts);
  const rear = says(rearWords, rearParts);
  return { wheel, end: decide(front.plain, rear.plain) ?? (front.plain || rear.plain ? null : decide(front.part, rear.part)) };
}

/** Whether a word that runs together, such as `wheelfl` or `tyrefrontleft`, holds the word `end`. */
const sticksTo = (word: string, end: string): boolean =>
  end.length > 3 ? word.includes(end) : word.startsWith(end) || word.endsWith(end);

const decide = (front: boolean, rear: boolean): "front" | "rear" | null => (front === rear ? null : front ? "front" : "rear");
