/** A study that uses every key. */
export const sketch = `study: pickup-bed
question: Does a bed cover pay, and where?
air:      { temperature: 15 degC, pressure: 1013.25 hPa, humidity: 0 % }
speed:    108 km/h            # one or a list
yaw:      0 deg
ground:   moving              # moving | fixed
baseline: open-bed
variants:
  open-bed:    { files: [geometry/pickup.stl, geometry/tailgate.stl] }
  covered-bed: { files: [geometry/pickup.stl, geometry/tailgate.stl, geometry/bed-cover.stl] }
body:
  unit: m
  travel: -x
  up: +z
  clearance: 0 m
  wheelbase: auto
  reference-area: auto
parts:
  wheels:    { match: "wheel-*", rotating: true }
  bed-cover: { match: "bed-cover" }
mesh:   { cells: 1.5 million, half: auto, y-plus: 50, layers: 3, shift: 0 %, levels: 1 }
solver: { turbulence: k-omega-SST, mode: steady, start: ladder, relaxation: 0.9, most-iterations: 3000 }
stop:   { drag: 1 count, lift: 3 counts, confidence: 95 % }
floor:  0
`;

/** The least that a study needs. */
export const least = `study: nose
speed: 30 m/s
variants:
  blunt: { files: [blunt.stl] }
`;
