import { mkdir, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { standInCard, temporaryFolder } from "./stand-in.js";

// A box of 1.0 x 0.4 x 0.3 m, 0.1 m above moving ground, in a domain of cells of 0.2 m: about 2 800 cells, meshed in half a second.
const corners = (scale: number) => {
  const [x, y, z] = [
    [0, 1],
    [-0.2, 0.2],
    [0.1, 0.4],
  ] as const;
  const at = (i: number, j: number, k: number) => [x[i], y[j], z[k]].map((value) => value! * scale).join(" ");
  return [at(0, 0, 0), at(1, 0, 0), at(1, 1, 0), at(0, 1, 0), at(0, 0, 1), at(1, 0, 1), at(1, 1, 1), at(0, 1, 1)];
};
const partTriangles: Record<string, number[][]> = {
  nose: [
    [0, 4, 7],
    [0, 7, 3],
  ],
  base: [
    [1, 2, 6],
    [1, 6, 5],
  ],
  hull: [
    [0, 1, 5],
    [0, 5, 4],
    [3, 7, 6],
    [3, 6, 2],
    [4, 5, 6],
    [4, 6, 7],
    [0, 3, 2],
    [0, 2, 1],
  ],
};

function stl(scale: number): string {
  const points = corners(scale);
  const facet = (triangle: number[]) =>
    `facet normal 0 0 0\nouter loop\n${triangle.map((corner) => `vertex ${points[corner]}\n`).join("")}endloop\nendfacet\n`;
  return Object.entries(partTriangles)
    .map(([name, triangles]) => `solid ${name}\n${triangles.map(facet).join("")}endsolid ${name}\n`)
    .join("");
}

const dictionary = (name: string, text: string, kind = "dictionary") =>
  `FoamFile { version 2.0; format ascii; class ${kind}; object ${name}; }\n${text}\n`;

const field = (name: string, dimensions: string, value: string, walls: string, kind = "volScalarField", more = "") =>
  dictionary(
    name,
    `dimensions [${dimensions}]; internalField uniform ${value};
boundaryField {
  inlet { type fixedValue; value uniform ${value}; }
  outlet { type inletOutlet; inletValue uniform ${kind === "volVectorField" ? "(0 0 0)" : value}; value uniform ${value}; }
  sides { type slip; }
  "(ground|body_.*)" { ${walls} }
  ${more}
}`,
    kind,
  );

export interface SmallCaseOptions {
  /** Size of the body against the domain it was made for. */
  scale?: number;
  /** Point that the mesher keeps the cells around. */
  keepPoint?: string;
  /** Relaxation factor of the velocity. */
  relaxation?: number;
  /** Name of the case folder. */
  folder?: string;
}

export const smallControl = dictionary(
  "controlDict",
  `application simpleFoam; startFrom startTime; startTime 0; stopAt endTime; endTime 30; deltaT 1;
writeControl timeStep; writeInterval 10; purgeWrite 2; writeFormat binary; writePrecision 10; timeFormat general; runTimeModifiable true;
functions { coefficients { type forceCoeffs; libs (forces); patches ("body_.*"); rho rhoInf; rhoInf 1; CofR (0.5 0 0); liftDir (0 0 1);
  dragDir (1 0 0); pitchAxis (0 1 0); magUInf 30; lRef 1; Aref 0.12; writeControl timeStep; writeInterval 1; log no; } }`,
);

/** Writes the case with its run card; returns its folder. */
export async function smallCase({
  scale = 1,
  keepPoint = "(-1.501 0.0123 1.51)",
  relaxation = 0.9,
  folder: name = "box-30ms",
}: SmallCaseOptions = {}): Promise<string> {
  const folder = join(await temporaryFolder(), name);
  for (const sub of ["0", "constant/triSurface", "system"]) await mkdir(join(folder, sub), { recursive: true });
  const card = {
    ...standInCard,
    parts: Object.keys(partTriangles).map((name) => ({ name, patch: `body_${name}` })),
    body: { bounds: { min: [0, -0.2, 0.1], max: [1, 0.2, 0.4] }, frontalArea: 0.12 },
    mesh: { ...standInCard.mesh, domain: { min: [-1.6, -1.2, 0], max: [3.2, 1.2, 1.6] }, baseCell: 0.2, predictedCells: 2800 },
    mostIterations: 30,
  };
  const files: Record<string, string> = {
    "dragledger.json": JSON.stringify(card),
    "constant/triSurface/body.stl": stl(scale),
    "constant/transportProperties": dictionary("transportProperties", "transportModel Newtonian; nu 1.5e-5;"),
    "constant/turbulenceProperties": dictionary(
      "turbulenceProperties",
      "simulationType RAS; RAS { RASModel kOmegaSST; turbulence on; printCoeffs off; }",
    ),
    "system/controlDict": smallControl,
    "system/blockMeshDict": dictionary(
      "blockMeshDict",
      `scale 1; vertices ((-1.6 -1.2 0) (3.2 -1.2 0) (3.2 1.2 0) (-1.6 1.2 0) (-1.6 -1.2 1.6) (3.2 -1.2 1.6) (3.2 1.2 1.6) (-1.6 1.2 1.6));
blocks (hex (0 1 2 3 4 5 6 7) (24 12 8) simpleGrading (1 1 1)); edges ();
boundary ( inlet { type patch; faces ((0 4 7 3)); } outlet { type patch; faces ((1 2 6 5)); } ground { type wall; faces ((0 3 2 1)); }
  sides { type patch; faces ((0 1 5 4) (3 7 6 2) (4 5 6 7)); } );
mergePatchPairs ();`,
    ),
    "system/surfaceFeatureExtractDict": dictionary(
      "surfaceFeatureExtractDict",
      "body.stl { extractionMethod extractFromSurface; extractFromSurfaceCoeffs { includedAngle 150; } writeObj no; }",
    ),
    "system/snappyHexMeshDict": dictionary("snappyHexMeshDict", snappy(keepPoint)),
    "system/fvSchemes": dictionary("fvSchemes", schemes),
    "system/fvSolution": dictionary(
      "fvSolution",
      `solvers { p { solver GAMG; smoother GaussSeidel; tolerance 1e-8; relTol 0.05; }
  "(U|k|omega)" { solver smoothSolver; smoother symGaussSeidel; tolerance 1e-9; relTol 0.1; } }
SIMPLE { consistent yes; nNonOrthogonalCorrectors 0; } relaxationFactors { equations { U ${relaxation}; "(k|omega)" 0.7; } }`,
    ),
    "0/U": field(
      "U",
      "0 1 -1 0 0 0 0",
      "(30 0 0)",
      "type noSlip;",
      "volVectorField",
      "ground { type fixedValue; value uniform (30 0 0); }",
    ),
    "0/p": field("p", "0 2 -2 0 0 0 0", "0", "type zeroGradient;")
      .replace("inlet { type fixedValue; value uniform 0; }", "inlet { type zeroGradient; }")
      .replace("type inletOutlet; inletValue uniform 0;", "type fixedValue;"),
    "0/k": field("k", "0 2 -2 0 0 0 0", "0.03", "type kqRWallFunction; value uniform 0.03;"),
    "0/omega": field("omega", "0 0 -1 0 0 0 0", "200", "type omegaWallFunction; value uniform 200;"),
    "0/nut": field("nut", "0 2 -1 0 0 0 0", "1.5e-4", "type nutkWallFunction; value uniform 0;"),
  };
  for (const [path, text] of Object.entries(files)) await writeFile(join(folder, path), text);
  return folder;
}

const snappy = (keepPoint: string) => `castellatedMesh true; snap true; addLayers false;
geometry { body.stl { type triSurfaceMesh; name body; } }
castellatedMeshControls { maxLocalCells 100000; maxGlobalCells 100000; minRefinementCells 0; nCellsBetweenLevels 2; maxLoadUnbalance 0.1;
  features ( { file "body.eMesh"; level 1; } ); refinementSurfaces { body { level (1 1); patchInfo { type wall; } } } resolveFeatureAngle 30;
  refinementRegions {} locationInMesh ${keepPoint}; allowFreeStandingZoneFaces true; }
snapControls { nSmoothPatch 3; tolerance 2; nSolveIter 30; nRelaxIter 5; nFeatureSnapIter 8; implicitFeatureSnap false; explicitFeatureSnap true;
  multiRegionFeatureSnap false; }
addLayersControls { relativeSizes true; layers {} expansionRatio 1.2; finalLayerThickness 0.4; minThickness 0.1; nGrow 0; featureAngle 130;
  nRelaxIter 3; nSmoothSurfaceNormals 1; nSmoothNormals 3; nSmoothThickness 10; maxFaceThicknessRatio 0.5; maxThicknessToMedialRatio 0.3;
  minMedianAxisAngle 90; nBufferCellsNoExtrude 0; nLayerIter 20; }
meshQualityControls { maxNonOrtho 65; maxBoundarySkewness 20; maxInternalSkewness 4; maxConcave 80; minVol 1e-13; minTetQuality 1e-15; minArea -1;
  minTwist 0.02; minDeterminant 0.001; minFaceWeight 0.05; minVolRatio 0.01; minTriangleTwist -1; nSmoothScale 4; errorReduction 0.75;
  relaxed { maxNonOrtho 75; } }
mergeTolerance 1e-6;`;

const schemes = `ddtSchemes { default steadyState; }
gradSchemes { default Gauss linear; grad(U) cellLimited Gauss linear 1; grad(k) cellLimited Gauss linear 1; grad(omega) cellLimited Gauss linear 1; }
divSchemes { default none; div(phi,U) bounded Gauss linearUpwindV grad(U); div(phi,k) bounded Gauss limitedLinear 1;
  div(phi,omega) bounded Gauss limitedLinear 1; div((nuEff*dev2(T(grad(U))))) Gauss linear; }
laplacianSchemes { default Gauss linear limited corrected 0.5; } interpolationSchemes { default linear; }
snGradSchemes { default limited corrected 0.5; } wallDist { method meshWave; }`;
