import {
  AmbientLight,
  BufferAttribute,
  BufferGeometry,
  Color,
  DirectionalLight,
  DoubleSide,
  Mesh,
  MeshStandardMaterial,
  PerspectiveCamera,
  Raycaster,
  Scene,
  Vector2,
  Vector3,
  WebGLRenderer,
} from "three";
import { OrbitControls } from "three/addons/controls/OrbitControls.js";
import { toCreasedNormals } from "three/addons/utils/BufferGeometryUtils.js";
import { pickedColour } from "./colours.js";
import type { PartMesh } from "./unpack.js";

/** Directions from the body to the eye, case axes (x rearward, y right, z up). */
export const views: { name: string; from: [number, number, number] }[] = [
  { name: "three-quarter", from: [-0.72, 0.62, 0.32] },
  { name: "front", from: [-1, 0, 0] },
  { name: "side", from: [0, 1, 0] },
  { name: "plan", from: [0, 0.0001, 1] },
];

/** Edges sharper than this stay sharp, radians. */
const crease = 0.6;

/** The body in WebGL, drawn only when something changed. Throws where there is no WebGL. */
export class BodyScene {
  private readonly scene = new Scene();
  private readonly camera = new PerspectiveCamera(28, 1.6, 0.05, 500);
  private readonly renderer: WebGLRenderer;
  private readonly controls: OrbitControls;
  private readonly variants = new Map<string, Mesh<BufferGeometry, MeshStandardMaterial>[]>();
  private shown: Mesh<BufferGeometry, MeshStandardMaterial>[] = [];
  private readonly target = new Vector3();
  private reach = 1;

  constructor(
    private readonly canvas: HTMLCanvasElement,
    private readonly colours: Map<string, string>,
    onPick: (part: string | null) => void,
  ) {
    this.renderer = new WebGLRenderer({ canvas, antialias: true, alpha: true, preserveDrawingBuffer: true });
    this.renderer.setPixelRatio(Math.min(2, devicePixelRatio));
    this.camera.up.set(0, 0, 1);
    this.scene.add(new AmbientLight(0xffffff, 1.4));
    for (const [x, y, z, strength] of [
      [-3, 4, 6, 2.2],
      [4, -5, 2, 0.8],
    ] as const) {
      const light = new DirectionalLight(0xffffff, strength);
      light.position.set(x, y, z);
      this.scene.add(light);
    }
    this.controls = new OrbitControls(this.camera, canvas);
    this.controls.addEventListener("change", () => this.draw());
    new ResizeObserver(() => this.resize()).observe(canvas);
    this.listen(onPick);
  }

  add(variant: string, parts: PartMesh[]): void {
    this.variants.set(
      variant,
      parts.map(({ name, vertices, indices }) => {
        const indexed = new BufferGeometry();
        indexed.setAttribute("position", new BufferAttribute(vertices, 3));
        indexed.setIndex(new BufferAttribute(indices, 1));
        const material = new MeshStandardMaterial({
          color: this.colours.get(name) ?? "#888888",
          roughness: 0.85,
          metalness: 0,
          side: DoubleSide,
        });
        const mesh = new Mesh(toCreasedNormals(indexed, crease), material);
        mesh.name = name;
        return mesh;
      }),
    );
  }

  show(variant: string): void {
    this.scene.remove(...this.shown);
    const first = this.shown.length === 0;
    this.shown = this.variants.get(variant) ?? [];
    this.scene.add(...this.shown);
    if (first) this.frame();
    this.draw();
  }

  mark(part: string | null): void {
    for (const mesh of [...this.variants.values()].flat())
      mesh.material.color = new Color(mesh.name === part ? pickedColour : (this.colours.get(mesh.name) ?? "#888888"));
    this.draw();
  }

  look([x, y, z]: [number, number, number]): void {
    const distance = (1.15 * this.reach) / Math.tan((this.camera.fov * Math.PI) / 360);
    this.camera.position.copy(this.target).addScaledVector(new Vector3(x, y, z).normalize(), distance);
    this.controls.target.copy(this.target);
    this.controls.update();
    this.draw();
  }

  private frame(): void {
    const low = new Vector3(1e9, 1e9, 1e9);
    const high = new Vector3(-1e9, -1e9, -1e9);
    for (const { geometry } of this.shown) {
      geometry.computeBoundingBox();
      low.min(geometry.boundingBox!.min);
      high.max(geometry.boundingBox!.max);
    }
    this.target.addVectors(low, high).multiplyScalar(0.5);
    // The picture is wider than high: half the height decides for a long low body.
    this.reach = 0.34 * low.distanceTo(high);
    this.look(views[0]!.from);
  }

  private turn(sideways: number, upwards: number): void {
    const arm = this.camera.position.clone().sub(this.controls.target);
    const distance = arm.length();
    const azimuth = Math.atan2(arm.y, arm.x) + sideways;
    const height = Math.max(-1.5, Math.min(1.5, Math.asin(arm.z / distance) + upwards));
    this.camera.position
      .set(Math.cos(azimuth) * Math.cos(height), Math.sin(azimuth) * Math.cos(height), Math.sin(height))
      .multiplyScalar(distance)
      .add(this.controls.target);
    this.controls.update();
  }

  private nearer(factor: number): void {
    this.camera.position.sub(this.controls.target).multiplyScalar(factor).add(this.controls.target);
    this.controls.update();
  }

  private listen(onPick: (part: string | null) => void): void {
    const keys: Record<string, () => void> = {
      ArrowLeft: () => this.turn(-0.12, 0),
      ArrowRight: () => this.turn(0.12, 0),
      ArrowUp: () => this.turn(0, 0.12),
      ArrowDown: () => this.turn(0, -0.12),
      "+": () => this.nearer(0.9),
      "-": () => this.nearer(1 / 0.9),
      ...Object.fromEntries(views.map(({ from }, index) => [String(index + 1), () => this.look(from)])),
    };
    this.canvas.addEventListener("keydown", (event) => {
      const act = keys[event.key];
      if (!act) return;
      event.preventDefault();
      act();
      this.draw();
    });
    let down = { x: 0, y: 0 };
    this.canvas.addEventListener("pointerdown", (event) => {
      down = { x: event.clientX, y: event.clientY };
    });
    this.canvas.addEventListener("pointerup", (event) => {
      // A drag turns the body; only a click picks.
      if (Math.hypot(event.clientX - down.x, event.clientY - down.y) < 4) onPick(this.partAt(event));
    });
  }

  private partAt(event: PointerEvent): string | null {
    const { left, top, width, height } = this.canvas.getBoundingClientRect();
    const point = new Vector2((2 * (event.clientX - left)) / width - 1, 1 - (2 * (event.clientY - top)) / height);
    const ray = new Raycaster();
    ray.setFromCamera(point, this.camera);
    return ray.intersectObjects(this.shown)[0]?.object.name ?? null;
  }

  private resize(): void {
    const { clientWidth, clientHeight } = this.canvas;
    if (clientWidth === 0 || clientHeight === 0) return;
    this.renderer.setSize(clientWidth, clientHeight, false);
    this.camera.aspect = clientWidth / clientHeight;
    this.camera.updateProjectionMatrix();
    this.draw();
  }

  private draw(): void {
    this.renderer.render(this.scene, this.camera);
  }
}
