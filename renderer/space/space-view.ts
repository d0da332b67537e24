import "#renderer/space/space.css";
import { AmbientLight, Color, DirectionalLight, Fog, Matrix4, PerspectiveCamera, Scene, WebGLRenderer } from "three";
import {
  approached,
  facing,
  lookingAlong,
  mmPerPixel,
  OPENING_DEG,
  type Orbit,
  orbitAround,
  shifted,
  turned,
  uprightOf,
  viewerAxes,
} from "#renderer/space/orbit.ts";
import { pickInSpace } from "#renderer/space/pick.ts";
import { SceneStore } from "#renderer/space/scene-store.ts";
import type { SpaceContent, SpaceEvents, SpaceHit } from "#renderer/space/space-content.ts";
import { listenToSpace } from "#renderer/space/space-input.ts";
import { type PointMm, pointMm } from "#shared/geometry/types.ts";
import { cross } from "#shared/geometry/vec3.ts";
import { coloursFrom } from "#shared/marks/colours.ts";

export const EMPTY_SPACE: SpaceContent = {
  document: null,
  strands: null,
  places: [],
  selection: {},
  guide: null,
  proposal: [],
  pins: [],
  plane: null,
  picture: null,
  surface: null,
  valve: null,
  bounds: { centre: pointMm(0, 0, 0), radiusMm: 30 },
  caption: "",
};

const NO_WEBGL = "This computer's browser offers no WebGL, so the view in space stays empty. All else works.";
const LOST_WEBGL = "The graphics were lost for a moment; the view comes back by itself.";
/** After this long without movement the full picture is drawn. */
const STILL_AFTER_MS = 160;
/** While moving, such a share of the surface points is drawn, and such a share of the resolution each way. */
const MOVING_SHARE = 1 / 4;
const MOVING_RESOLUTION = 0.5;

/** The trees in space inside a host element, which it fills. Draws on change only; without WebGL it says so and stays still. */
export class SpaceView {
  /** False when this computer offers no WebGL; showing things then has no effect. */
  readonly available: boolean;
  readonly element = document.createElement("div");
  private content = EMPTY_SPACE;
  private orbit: Orbit = orbitAround(EMPTY_SPACE.bounds.centre, EMPTY_SPACE.bounds.radiusMm, 1);
  private readonly note = document.createElement("p");
  private readonly renderer: WebGLRenderer | null;
  private readonly scene = new Scene();
  private readonly camera = new PerspectiveCamera(OPENING_DEG);
  private readonly lamp = new DirectionalLight(0xffffff, 2.1);
  private readonly store = new SceneStore(this.scene);
  private readonly watcher: ResizeObserver | null = null;
  private readonly stopListening: () => void = () => undefined;
  private size = { width: 0, height: 0 };
  private frame = 0;
  private stillTimer: ReturnType<typeof setTimeout> | undefined;
  private moving = false;
  /** The person has turned or zoomed: later bounds do not move the view. */
  private touched = false;

  constructor(
    host: HTMLElement,
    private readonly events: SpaceEvents = {},
  ) {
    this.element.className = "space-view on-picture";
    this.note.className = "space-note";
    this.note.hidden = true;
    this.element.append(this.note);
    host.append(this.element);
    this.renderer = makeRenderer();
    this.available = this.renderer !== null;
    if (this.renderer === null) {
      this.note.classList.add("alone");
      this.say(NO_WEBGL);
      return;
    }
    const { domElement } = this.renderer;
    this.element.prepend(domElement);
    this.element.tabIndex = 0;
    this.element.setAttribute("role", "application");
    this.element.setAttribute(
      "aria-label",
      "Trees in space. Arrow keys turn, with Shift in large steps, with Alt they move; plus and minus zoom, Home shows all.",
    );
    domElement.addEventListener("webglcontextlost", (event) => {
      event.preventDefault();
      this.say(LOST_WEBGL);
    });
    domElement.addEventListener("webglcontextrestored", () => {
      this.say(this.content.caption);
      this.redraw();
    });
    this.scene.add(this.lamp, new AmbientLight(0xffffff, 1.3));
    this.watcher = new ResizeObserver(() => this.resize());
    this.watcher.observe(this.element);
    this.stopListening = listenToSpace(this.element, {
      turn: (turnDeg, tiltDeg) => this.turn(turnDeg, tiltDeg),
      shift: (dx, dy) => this.move(shifted(this.orbit, uprightOf(this.content.valve), dx, dy, this.size.height)),
      zoom: (factor) => this.zoom(factor),
      all: () => this.showAll(),
      click: (x, y, modifiers) => this.events.click?.(this.pick(x, y), modifiers),
      hover: (x, y) => {
        const hit = this.pick(x, y);
        this.element.dataset.over = hit === null ? "no" : "yes";
        this.events.hover?.(hit);
      },
      leave: () => this.events.hover?.(null),
    });
  }

  /** Shows what is given and keeps the rest; drawn at the next frame. */
  show(change: Partial<SpaceContent>): void {
    const before = this.content;
    this.content = { ...before, ...change };
    const now = this.content;
    if (!this.available) return;
    this.store.changed(before, now);
    if ((now.bounds !== before.bounds || now.valve !== before.valve) && !this.touched) this.orbit = this.whole();
    this.say(now.caption);
    this.redraw();
  }

  /** Turns about the valve's axis (the viewer walks to the right for positive angles) and tilts. */
  turn(turnDeg: number, tiltDeg: number): void {
    this.move(turned(this.orbit, turnDeg, tiltDeg));
  }

  /** Above 1 = closer. */
  zoom(factor: number): void {
    this.move(approached(this.orbit, factor));
  }

  /** Puts a place in the middle, keeping the direction and the distance. */
  centreOn(target: PointMm): void {
    this.move({ ...this.orbit, target });
  }

  /** Turns to a place, from the side of the valve on which it lies, and comes so near that `acrossMm` fill the view; never farther than now. */
  turnTo(place: PointMm, acrossMm: number): void {
    const { valve, bounds } = this.content;
    this.move(facing(this.orbit, uprightOf(valve), place, valve?.centre ?? bounds.centre, acrossMm));
  }

  /** Shows everything, upright, from the front. */
  showAll(): void {
    this.move(this.whole());
    this.touched = false;
  }

  /** Looks along the section's line of sight, at the middle of its plane. */
  lookAlongSection(): void {
    const { plane, valve } = this.content;
    if (plane === null) return;
    const away = cross(plane.right, plane.down);
    this.move(lookingAlong({ ...this.orbit, target: plane.centre }, uprightOf(valve), away));
  }

  /** Reads the theme's colours again (after a change of theme). */
  themeChanged(): void {
    this.store.changedColours();
    this.redraw();
  }

  dispose(): void {
    cancelAnimationFrame(this.frame);
    clearTimeout(this.stillTimer);
    this.stopListening();
    this.watcher?.disconnect();
    this.store.dispose();
    this.renderer?.dispose();
    this.renderer?.forceContextLoss();
    this.element.remove();
  }

  /** The view of everything in the pane as it is now. */
  private whole(): Orbit {
    const { bounds, valve } = this.content;
    // An upright valve turns about its own axis, not about the middle of the scan.
    return orbitAround(
      valve?.centre ?? bounds.centre,
      bounds.radiusMm,
      this.size.height === 0 ? 1 : this.size.width / this.size.height,
    );
  }

  private move(orbit: Orbit): void {
    this.orbit = orbit;
    this.touched = true;
    this.moving = true;
    clearTimeout(this.stillTimer);
    this.stillTimer = setTimeout(() => {
      this.moving = false;
      this.redraw();
    }, STILL_AFTER_MS);
    this.events.turned?.();
    this.redraw();
  }

  private pick(x: number, y: number): SpaceHit | null {
    if (this.renderer === null || this.size.width === 0) return null;
    this.placeCamera();
    const matrix = new Matrix4().multiplyMatrices(this.camera.projectionMatrix, this.camera.matrixWorldInverse);
    const nodes = this.content.document?.nodes.values() ?? [];
    const what = { strands: this.store.strands, nodes, surface: this.content.surface };
    return pickInSpace(what, { matrix: matrix.elements, ...this.size }, x, y);
  }

  private placeCamera(): void {
    const { orbit, camera } = this;
    const axes = viewerAxes(orbit, uprightOf(this.content.valve));
    camera.aspect = this.size.width / Math.max(1, this.size.height);
    camera.near = orbit.distanceMm / 100;
    camera.far = orbit.distanceMm + 10 * Math.max(1, this.content.bounds.radiusMm);
    camera.up.set(axes.up[0], axes.up[1], axes.up[2]);
    camera.position.set(axes.eye[0], axes.eye[1], axes.eye[2]);
    camera.lookAt(orbit.target[0], orbit.target[1], orbit.target[2]);
    camera.updateProjectionMatrix();
    camera.updateMatrixWorld();
    const side = mmPerPixel(orbit, this.size.height) * this.size.height;
    this.lamp.position.copy(camera.position);
    this.lamp.position.x += axes.up[0] * side * 0.5 - axes.right[0] * side * 0.35;
    this.lamp.position.y += axes.up[1] * side * 0.5 - axes.right[1] * side * 0.35;
    this.lamp.position.z += axes.up[2] * side * 0.5 - axes.right[2] * side * 0.35;
    this.lamp.target.position.set(orbit.target[0], orbit.target[1], orbit.target[2]);
    this.lamp.target.updateMatrixWorld();
  }

  private resize(): void {
    const { clientWidth: width, clientHeight: height } = this.element;
    this.size = { width, height };
    if (!this.touched) this.orbit = this.whole();
    this.renderer?.setSize(width, height, false);
    this.redraw();
  }

  private redraw(): void {
    if (this.renderer === null || this.frame !== 0) return;
    this.frame = requestAnimationFrame(() => {
      this.frame = 0;
      this.draw();
    });
  }

  private draw(): void {
    if (this.renderer === null || this.size.width === 0 || this.size.height === 0) return;
    const style = getComputedStyle(this.element);
    const colours = coloursFrom((name) => style.getPropertyValue(name));
    const ground = new Color(style.backgroundColor);
    this.scene.background = ground;
    // What lies farther away fades a little: the eye needs it to tell front from back in a cloud of points.
    const { radiusMm } = this.content.bounds;
    this.scene.fog = new Fog(ground, Math.max(0, this.orbit.distanceMm - radiusMm * 0.5), this.orbit.distanceMm + radiusMm * 1.5);
    this.store.refresh(this.content, colours);
    this.store.fitTo(mmPerPixel(this.orbit, this.size.height), this.moving ? MOVING_SHARE : 1);
    const ratio = (globalThis.devicePixelRatio || 1) * (this.moving ? MOVING_RESOLUTION : 1);
    if (this.renderer.getPixelRatio() !== ratio) this.renderer.setPixelRatio(ratio);
    this.placeCamera();
    this.renderer.render(this.scene, this.camera);
  }

  private say(words: string): void {
    this.note.textContent = words;
    this.note.hidden = words === "";
  }
}

function makeRenderer(): WebGLRenderer | null {
  try {
    return new WebGLRenderer({ antialias: true, powerPreference: "low-power" });
  } catch {
    return null;
  }
}
