import {
  BufferAttribute,
  BufferGeometry,
  CanvasTexture,
  Color,
  DirectionalLight,
  DoubleSide,
  EdgesGeometry,
  Group,
  HemisphereLight,
  LineBasicMaterial,
  LineSegments,
  Mesh,
  MeshStandardMaterial,
  PerspectiveCamera,
  Raycaster,
  Scene,
  Sprite,
  SpriteMaterial,
  Vector2,
  Vector3,
  WebGLRenderer,
} from "three";
import { OrbitControls } from "three/addons/controls/OrbitControls.js";
import { toCreasedNormals } from "three/addons/utils/BufferGeometryUtils.js";
import { inkTone } from "../tones.js";
import type { MeshArrays } from "./unpack.js";

export interface SceneVariant {
  name: string;
  parts: { name: string; mesh: number }[];
}

/** Edges sharper than this, radians, stay sharp and are drawn as lines. */
const crease = 0.6;
const edgeDegrees = 38;

let ring: CanvasTexture | null = null;

/** A white ring on nothing, tinted by its material. */
function ringTexture(): CanvasTexture {
  if (ring !== null) return ring;
  const canvas = document.createElement("canvas");
  canvas.width = canvas.height = 64;
  const pen = canvas.getContext("2d")!;
  pen.lineWidth = 9;
  pen.strokeStyle = "#fff";
  pen.arc(32, 32, 25, 0, 2 * Math.PI);
  pen.stroke();
  ring = new CanvasTexture(canvas);
  return ring;
}

type Drawn = Mesh<BufferGeometry, MeshStandardMaterial>;

/** The body in WebGL, drawn only when something changed. The constructor throws where there is no WebGL. */
export class BodyScene {
  private readonly scene = new Scene();
  private readonly camera = new PerspectiveCamera(26, 1.6, 0.05, 500);
  private readonly renderer: WebGLRenderer;
  private readonly controls: OrbitControls;
  private readonly groups = new Map<string, Group>();
  private readonly lines = new LineBasicMaterial({ color: inkTone, transparent: true, opacity: 0.42 });
  private readonly marks = new Group();
  private readonly middle = new Vector3();
  private halfDiagonal = 1;
  private asked = false;

  constructor(private readonly canvas: HTMLCanvasElement) {
    this.renderer = new WebGLRenderer({ canvas, antialias: true, alpha: true, preserveDrawingBuffer: true });
    this.renderer.setPixelRatio(Math.min(2, devicePixelRatio));
    this.camera.up.set(0, 0, 1);
    this.scene.add(new HemisphereLight(0xffffff, 0x9a948a, 1.7));
    // The main light follows the eye, so that no side is ever dark.
    const light = new DirectionalLight(0xffffff, 1.9);
    light.position.set(-0.7, 1.2, 0.8);
    this.camera.add(light);
    this.scene.add(this.camera, this.marks);
    this.controls = new OrbitControls(this.camera, canvas);
    this.controls.addEventListener("change", () => this.draw());
    this.leavePageItsScrolling();
    new ResizeObserver(() => this.resize()).observe(canvas);
  }

  /** Builds all variants; a mesh that two of them share is built once. */
  load(meshes: MeshArrays[], variants: SceneVariant[]): void {
    const built = meshes.map(({ vertices, indices }) => {
      const indexed = new BufferGeometry();
      indexed.setAttribute("position", new BufferAttribute(vertices, 3));
      indexed.setIndex(new BufferAttribute(indices, 1));
      return { surface: toCreasedNormals(indexed, crease), edges: new EdgesGeometry(indexed, edgeDegrees) };
    });
    for (const { name, parts } of variants) {
      const group = new Group();
      for (const part of parts) {
        const { surface, edges } = built[part.mesh]!;
        const mesh: Drawn = new Mesh(
          surface,
          new MeshStandardMaterial({
            roughness: 0.82,
            metalness: 0,
            side: DoubleSide,
            polygonOffset: true,
            polygonOffsetFactor: 1,
            polygonOffsetUnits: 1,
          }),
        );
        mesh.name = part.name;
        group.add(mesh, new LineSegments(edges, this.lines));
      }
      group.visible = false;
      this.groups.set(name, group);
      this.scene.add(group);
    }
    this.frame(built.map(({ surface }) => surface));
  }

  show(variant: string): void {
    for (const [name, group] of this.groups) group.visible = name === variant;
    this.draw();
  }

  /** Paints every part of a variant. */
  paint(variant: string, colourOf: (part: string) => string): void {
    for (const mesh of this.meshes(variant)) mesh.material.color = new Color(colourOf(mesh.name));
    this.draw();
  }

  /** Name of the part under a point of the window; null beside the body. */
  partAt(variant: string, clientX: number, clientY: number): string | null {
    const { left, top, width, height } = this.canvas.getBoundingClientRect();
    const point = new Vector2((2 * (clientX - left)) / width - 1, 1 - (2 * (clientY - top)) / height);
    const ray = new Raycaster();
    ray.setFromCamera(point, this.camera);
    return ray.intersectObjects(this.meshes(variant))[0]?.object.name ?? null;
  }

  /** Looks at the middle of the body from a direction, case axes, so that all of it is seen. */
  look([x, y, z]: [number, number, number]): void {
    const narrow = Math.min(1, this.camera.aspect / 1.5);
    const distance = (0.67 * this.halfDiagonal) / Math.tan((this.camera.fov * Math.PI) / 360) / narrow;
    this.camera.position.copy(this.middle).addScaledVector(new Vector3(x, y, z).normalize(), distance);
    this.controls.target.copy(this.middle);
    this.controls.update();
    this.draw();
  }

  /** Shows or hides one part of a variant, with its edges. */
  hide(variant: string, part: string, hidden: boolean): void {
    const children = this.groups.get(variant)?.children ?? [];
    for (const [k, child] of children.entries()) {
      if (!(child instanceof Mesh) || child.name !== part) continue;
      child.visible = !hidden;
      children[k + 1]!.visible = !hidden;
    }
    this.draw();
  }

  /** Rings about places, drawn over the body so that hidden ones are found too; they replace those before. Metres, case axes. */
  mark(places: [number, number, number][], colour: string): void {
    for (const sprite of this.marks.children) if (sprite instanceof Sprite) sprite.material.dispose();
    this.marks.clear();
    for (const place of places) {
      const material = new SpriteMaterial({ map: ringTexture(), color: colour, depthTest: false, sizeAttenuation: false });
      const sprite = new Sprite(material);
      sprite.position.set(...place);
      sprite.scale.setScalar(0.028);
      sprite.renderOrder = 2;
      this.marks.add(sprite);
    }
    this.draw();
  }

  /** Straight lines over the body: two places each. */
  line(ends: [number, number, number][], colour: string): void {
    const geometry = new BufferGeometry().setFromPoints(ends.map((end) => new Vector3(...end)));
    const lines = new LineSegments(geometry, new LineBasicMaterial({ color: colour, depthTest: false }));
    lines.renderOrder = 1;
    this.scene.add(lines);
    this.draw();
  }

  /** Turns about a place and looks at it from near, from the side of the body that it lies on. */
  fly(place: [number, number, number]): void {
    const target = new Vector3(...place);
    const outward = target.clone().sub(this.middle);
    const away = outward.length() > 0.05 * this.halfDiagonal ? outward : new Vector3(-0.72, -0.62, 0.36);
    away.z = Math.max(away.z, 0.15 * away.length());
    this.camera.position.copy(target).addScaledVector(away.normalize(), 0.9 * this.halfDiagonal);
    this.controls.target.copy(target);
    this.controls.update();
    this.draw();
  }

  /** Where the eye is, metres, case axes. */
  get eye(): [number, number, number] {
    return this.camera.position.toArray();
  }

  /** Radians about the vertical, and upwards. */
  turn(sideways: number, upwards: number): void {
    const arm = this.camera.position.clone().sub(this.controls.target);
    const distance = arm.length();
    const azimuth = Math.atan2(arm.y, arm.x) + sideways;
    const height = Math.max(-1.5, Math.min(1.5, Math.asin(arm.z / distance) + upwards));
    this.camera.position
      .set(Math.cos(azimuth) * Math.cos(height), Math.sin(azimuth) * Math.cos(height), Math.sin(height))
      .multiplyScalar(distance)
      .add(this.controls.target);
    this.controls.update();
    this.draw();
  }

  /** Shares of the distance, to the right and up on the screen. */
  shift(right: number, up: number): void {
    const distance = this.camera.position.distanceTo(this.controls.target);
    const move = new Vector3(1, 0, 0)
      .applyQuaternion(this.camera.quaternion)
      .multiplyScalar(right * distance)
      .addScaledVector(new Vector3(0, 1, 0).applyQuaternion(this.camera.quaternion), up * distance);
    this.camera.position.add(move);
    this.controls.target.add(move);
    this.controls.update();
    this.draw();
  }

  nearer(factor: number): void {
    this.camera.position.sub(this.controls.target).multiplyScalar(factor).add(this.controls.target);
    this.controls.update();
    this.draw();
  }

  private meshes(variant: string): Drawn[] {
    return (this.groups.get(variant)?.children ?? []).filter((child): child is Drawn => child instanceof Mesh);
  }

  private frame(surfaces: BufferGeometry[]): void {
    const low = new Vector3(Infinity, Infinity, Infinity);
    const high = new Vector3(-Infinity, -Infinity, -Infinity);
    for (const surface of surfaces) {
      surface.computeBoundingBox();
      low.min(surface.boundingBox!.min);
      high.max(surface.boundingBox!.max);
    }
    if (low.x > high.x) return;
    this.middle.addVectors(low, high).multiplyScalar(0.5);
    this.halfDiagonal = low.distanceTo(high) / 2;
    this.controls.maxDistance = 40 * this.halfDiagonal;
  }

  /** The wheel zooms only while the picture has the focus, and a finger that moves up or down scrolls the page. */
  private leavePageItsScrolling(): void {
    const { canvas, controls } = this;
    controls.enableZoom = false;
    canvas.addEventListener("focus", () => (controls.enableZoom = true));
    canvas.addEventListener("blur", () => (controls.enableZoom = false));
    canvas.addEventListener("pointerdown", () => canvas.focus({ preventScroll: true }));
    canvas.style.touchAction = "pan-y";
  }

  private resize(): void {
    const { clientWidth, clientHeight } = this.canvas;
    if (clientWidth === 0 || clientHeight === 0) return;
    this.renderer.setSize(clientWidth, clientHeight, false);
    this.camera.aspect = clientWidth / clientHeight;
    this.camera.updateProjectionMatrix();
    this.draw();
  }

  /** At most one picture per frame of the screen. */
  private draw(): void {
    if (this.asked) return;
    this.asked = true;
    requestAnimationFrame(() => {
      this.asked = false;
      this.renderer.render(this.scene, this.camera);
    });
  }
}
