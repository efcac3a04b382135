import { open, readdir, stat } from "node:fs/promises";
import { join } from "node:path";

/** Name of the function object that writes the coefficients of the whole vehicle. */
export const coefficientsObject = "coefficients";

interface FollowedFile {
  path: string;
  /** bytes read so far */
  offset: number;
  /** bytes of a line whose end was not there yet */
  rest: string;
  columns: { time: number; cd: number; cl: number } | null;
  width: number;
}

/**
 * Follows the coefficient files of a case while a solver appends to them: each poll reads only what is new. Rows of several files (one per
 * start) become one history: where a row's time is not past the last one, the run went back, and the rows from that time on are dropped.
 */
export class HistoryFollower {
  private readonly files = new Map<string, FollowedFile>();
  private times = new Float64Array(1024);
  private drags = new Float64Array(1024);
  private lifts = new Float64Array(1024);
  rows = 0;

  constructor(private readonly casePath: string) {}

  /** Iteration of the last row; 0 without rows. */
  get iteration(): number {
    return this.rows > 0 ? this.times[this.rows - 1]! : 0;
  }

  get cd(): Float64Array {
    return this.drags.subarray(0, this.rows);
  }

  get cl(): Float64Array {
    return this.lifts.subarray(0, this.rows);
  }

  get time(): Float64Array {
    return this.times.subarray(0, this.rows);
  }

  /** Reads what was written since the last call; the number of rows taken. Reads files. */
  async poll(): Promise<number> {
    let taken = 0;
    for (const path of await this.list()) {
      const file = this.files.get(path) ?? { path, offset: 0, rest: "", columns: null, width: 0 };
      this.files.set(path, file);
      taken += await this.readOn(file);
    }
    return taken;
  }

  /** Drops rows past an iteration: those of a run that was continued from before them. */
  dropAfter(iteration: number): void {
    while (this.rows > 0 && this.times[this.rows - 1]! > iteration) this.rows -= 1;
  }

  /** Files in the order in which they were begun: folders by start time, in one folder the plain name before the suffixed one. */
  private async list(): Promise<string[]> {
    const object = join(this.casePath, "postProcessing", coefficientsObject);
    const folders = (await readdir(object).catch(() => [] as string[])).filter((name) => Number.isFinite(Number(name)));
    const paths: string[] = [];
    for (const folder of folders.sort((a, b) => Number(a) - Number(b))) {
      const names = await readdir(join(object, folder)).catch(() => [] as string[]);
      const tables = names.filter((name) => /^(coefficient|forceCoeffs)(_[\d.e+-]+)?\.dat$/.test(name));
      paths.push(...tables.sort((a, b) => a.length - b.length).map((name) => join(object, folder, name)));
    }
    return paths;
  }

  private async readOn(file: FollowedFile): Promise<number> {
    const size = (await stat(file.path).catch(() => null))?.size ?? 0;
    if (size < file.offset) Object.assign(file, { offset: 0, rest: "", columns: null });
    if (size === file.offset) return 0;
    const handle = await open(file.path, "r");
    const buffer = Buffer.alloc(size - file.offset);
    try {
      const { bytesRead } = await handle.read(buffer, 0, buffer.length, file.offset);
      file.offset += bytesRead;
      const lines = (file.rest + buffer.toString("latin1", 0, bytesRead)).split("\n");
      file.rest = lines.pop()!;
      return lines.reduce((taken, line) => taken + (this.take(file, line) ? 1 : 0), 0);
    } finally {
      await handle.close();
    }
  }

  private take(file: FollowedFile, line: string): boolean {
    const text = line.trim();
    if (text.startsWith("#")) {
      const names = text.slice(1).trim().split(/\s+/);
      if (names[0] !== "Time") return false;
      const cd = names.indexOf("Cd");
      const cl = names.indexOf("Cl");
      file.columns = cd > 0 && cl > 0 ? { time: 0, cd, cl } : null;
      file.width = names.length;
      return false;
    }
    const cells = text.split(/\s+/);
    if (!file.columns || cells.length !== file.width) return false;
    this.push(numberOf(cells[0]!), numberOf(cells[file.columns.cd]!), numberOf(cells[file.columns.cl]!));
    return true;
  }

  private push(time: number, cd: number, cl: number): void {
    while (this.rows > 0 && this.times[this.rows - 1]! >= time) this.rows -= 1;
    if (this.rows === this.times.length) {
      this.times = grown(this.times);
      this.drags = grown(this.drags);
      this.lifts = grown(this.lifts);
    }
    this.times[this.rows] = time;
    this.drags[this.rows] = cd;
    this.lifts[this.rows] = cl;
    this.rows += 1;
  }
}

function grown(values: Float64Array): Float64Array<ArrayBuffer> {
  const larger = new Float64Array(2 * values.length);
  larger.set(values);
  return larger;
}

/** As the solver prints numbers: also `nan`, `-nan`, `inf`, `-inf`. */
function numberOf(cell: string): number {
  const value = Number(cell);
  if (!Number.isNaN(value)) return value;
  return /^[+-]?inf/i.test(cell) ? (cell.startsWith("-") ? -Infinity : Infinity) : Number.NaN;
}
