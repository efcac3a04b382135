/** One program of a case's way from dictionaries to histories. */
export interface Step {
  /** Shown to the user; unique within a case. */
  name: string;
  program: string;
  args: string[];
  /** Name of its log in the case folder. */
  log: string;
  /** More than 1: started through the MPI launcher. */
  ranks: number;
}

export const decompositionFile = "system/decomposition";

const serial = (program: string, ...args: string[]): Step => ({ name: program, program, args, log: `log.${program}`, ranks: 1 });

/**
 * The mesh is always made by one process: a mesh made in parallel depends on the number of processes, and two variants would differ by
 * more than their bodies. Renumbering takes place in constant/: the (uniform) fields in 0/ would be written anew
 * otherwise, and no longer be what was prepared.
 */
export function meshSteps(has: { features: boolean }): Step[] {
  return [
    serial("blockMesh"),
    ...(has.features ? [serial("surfaceFeatureExtract")] : []),
    serial("snappyHexMesh", "-overwrite"),
    serial("renumberMesh", "-overwrite", "-constant"),
    serial("checkMesh"),
  ];
}

/** From a finished mesh to a solution, on one rank or divided over several and put together again. */
export function solveSteps(ranks: number): Step[] {
  if (ranks <= 1) return [serial("simpleFoam")];
  return [
    divideStep(),
    {
      name: "simpleFoam",
      program: "simpleFoam",
      args: ["-parallel", "-decomposeParDict", decompositionFile],
      log: "log.simpleFoam",
      ranks,
    },
    joinStep(),
  ];
}

/** From a solved rung (its case folder) onto the mesh of the case that it is started in. */
export const mapStep = (rung: string): Step => serial("mapFields", rung, "-consistent", "-sourceTime", "latestTime");

/** The iterations in first order, in a folder of their own. */
export const firstOrderStep: Step = { ...serial("simpleFoam"), name: "simpleFoam first order", log: "log.first-order" };

export const divideStep = (): Step => serial("decomposePar", "-force", "-latestTime", "-decomposeParDict", decompositionFile);
export const joinStep = (): Step => serial("reconstructPar", "-latestTime");

/** The command line of a step: a program and its arguments, never a shell's text. */
export function commandOf(step: Step, folder: string, mpirun: string | null): { program: string; args: string[] } {
  const program = `${folder}/${step.program}`;
  if (step.ranks <= 1) return { program, args: step.args };
  if (mpirun === null) throw new Error(`${step.name} on ${step.ranks} ranks without an MPI launcher`);
  return { program: mpirun, args: ["-np", String(step.ranks), program, ...step.args] };
}

/**
 * Dictionary that divides the domain into `ranks` blocks of equal cell counts: no extra library is needed (scotch is missing from some
 * builds), and the same mesh is always divided alike. The longest side of the domain is cut most.
 */
export function decompositionText(ranks: number, size: readonly [number, number, number]): string {
  const n = divisionsOf(ranks, size);
  return `FoamFile { version 2.0; format ascii; class dictionary; object decomposition; }
numberOfSubdomains ${ranks};
method hierarchical;
hierarchicalCoeffs { n (${n.join(" ")}); delta 0.001; order xyz; }
`;
}

/** Factors of `ranks` for x, y, z: each prime, largest first, goes to the side with the longest piece left. */
export function divisionsOf(ranks: number, size: readonly [number, number, number]): [number, number, number] {
  const n: [number, number, number] = [1, 1, 1];
  for (const prime of primesOf(ranks).reverse()) {
    const longest = [0, 1, 2].reduce((best, axis) => (size[axis]! / n[axis]! > size[best]! / n[best]! ? axis : best), 0);
    n[longest] = n[longest]! * prime;
  }
  return n;
}

function primesOf(value: number): number[] {
  const primes: number[] = [];
  let rest = value;
  for (let factor = 2; factor * factor <= rest; factor += 1) {
    while (rest % factor === 0) {
      primes.push(factor);
      rest /= factor;
    }
  }
  if (rest > 1) primes.push(rest);
  return primes;
}
