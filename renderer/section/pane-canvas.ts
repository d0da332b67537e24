import type { PaneSize } from "#renderer/section/view-plane.ts";

/** Canvases stacked in a host that they fill, one canvas pixel per device pixel. */
export class PaneCanvases {
  readonly root: HTMLDivElement;
  readonly layers: readonly HTMLCanvasElement[];
  private readonly watcher: ResizeObserver;
  private device = { width: 0, height: 0 };
  size: PaneSize = { width: 0, height: 0, ratio: 1 };

  /** @param resized called when the size in device pixels has changed; the canvases are then empty. */
  constructor(host: HTMLElement, className: string, layers: number, resized: () => void) {
    this.root = document.createElement("div");
    this.root.className = className;
    this.layers = Array.from({ length: layers }, () => document.createElement("canvas"));
    this.root.append(...this.layers);
    host.append(this.root);
    this.watcher = new ResizeObserver((entries) => {
      const entry = entries[entries.length - 1]!;
      const exact = entry.devicePixelContentBoxSize?.[0];
      const ratio = globalThis.devicePixelRatio || 1;
      const width = devicePixels(exact?.inlineSize, entry.contentRect.width * ratio);
      const height = devicePixels(exact?.blockSize, entry.contentRect.height * ratio);
      if (width === this.device.width && height === this.device.height && ratio === this.size.ratio) return;
      this.device = { width, height };
      this.size = { width: width / ratio, height: height / ratio, ratio };
      for (const canvas of this.layers) {
        canvas.width = width;
        canvas.height = height;
      }
      resized();
    });
    try {
      this.watcher.observe(this.root, { box: "device-pixel-content-box" });
    } catch {
      this.watcher.observe(this.root);
    }
  }

  dispose(): void {
    this.watcher.disconnect();
    this.root.remove();
  }
}

/** The browser's own count where it agrees with the ratio to a pixel (an emulated ratio does not reach it), else the rounded one. */
function devicePixels(exact: number | undefined, scaled: number): number {
  return exact !== undefined && Math.abs(exact - scaled) < 1 ? exact : Math.round(scaled);
}
