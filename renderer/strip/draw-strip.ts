import { radiusProfile } from "#renderer/strip/radius-profile.ts";
import type { StripContent } from "#renderer/strip/strip-content.ts";
import { axisMarks, filmSquares, type Rect, rowOf, type StripLayout } from "#renderer/strip/strip-layout.ts";
import type { ViewColours } from "#shared/marks/colours.ts";

export interface StripInk extends ViewColours {
  readonly soft: string;
  readonly family: string;
}

/** Grey pictures as bitmaps, made once per answer. */
export class StripPictures {
  private readonly made = new WeakMap<Uint8Array, HTMLCanvasElement>();

  of(body: Uint8Array, width: number, height: number): HTMLCanvasElement {
    let canvas = this.made.get(body);
    if (canvas === undefined) {
      canvas = document.createElement("canvas");
      canvas.width = width;
      canvas.height = height;
      const to = canvas.getContext("2d")!;
      const pixels = to.createImageData(width, height);
      const words = new Uint32Array(pixels.data.buffer);
      for (let i = 0; i < words.length; i++) words[i] = (body[i]! * 0x010101) | 0xff000000;
      to.putImageData(pixels, 0, 0);
      this.made.set(body, canvas);
    }
    return canvas;
  }
}

/** Draws everything of the strip; coordinates are CSS pixels. */
export function drawStrip(
  to: CanvasRenderingContext2D,
  content: StripContent,
  layout: StripLayout,
  pictures: StripPictures,
  hover: number | null,
  ink: StripInk,
): void {
  drawImage(to, content, layout.strip, pictures);
  drawFilm(to, content, layout, pictures, ink);
  drawAxis(to, content, layout.axis, ink);
  drawProfile(to, content, layout.profile, ink);
  drawFit(to, content, layout.strip, ink);
  drawPins(to, content, layout.strip, ink);
  drawWords(to, content, layout, ink);
  if (hover !== null) line(to, layout, rowOf(layout.strip, hover, content.lengthMm), ink.ink, 1, [3, 3]);
  if (content.position !== null) line(to, layout, rowOf(layout.strip, content.position, content.lengthMm), ink.accent, 2, []);
}

function drawImage(to: CanvasRenderingContext2D, content: StripContent, rect: Rect, pictures: StripPictures): void {
  to.fillStyle = "#000";
  to.fillRect(rect.x, rect.y, rect.width, rect.height);
  if (content.image === null) return;
  const { width, height } = content.image.header;
  to.imageSmoothingEnabled = true;
  to.drawImage(pictures.of(content.image.body, width, height), rect.x, rect.y, rect.width, rect.height);
}

function drawFilm(
  to: CanvasRenderingContext2D,
  content: StripContent,
  layout: StripLayout,
  pictures: StripPictures,
  ink: StripInk,
): void {
  if (content.film === null) return;
  const { header, body } = content.film;
  const picture = pictures.of(body, header.side, header.side * header.count);
  const squares = filmSquares(layout.film, header.at, content.lengthMm);
  const nearest =
    content.position === null
      ? -1
      : header.at.reduce(
          (best, at, i) => (Math.abs(at - content.position!) < Math.abs(header.at[best]! - content.position!) ? i : best),
          0,
        );
  squares.forEach(({ x, y, side }, i) => {
    to.drawImage(picture, 0, i * header.side, header.side, header.side, x, y, side, side);
    to.setLineDash([]);
    to.strokeStyle = i === nearest ? ink.accent : ink.line;
    to.lineWidth = i === nearest ? 2 : 1;
    to.strokeRect(x + 0.5, y + 0.5, side - 1, side - 1);
  });
}

function drawAxis(to: CanvasRenderingContext2D, content: StripContent, rect: Rect, ink: StripInk): void {
  to.font = `500 11px ${ink.family}`;
  to.textBaseline = "middle";
  to.textAlign = "right";
  to.strokeStyle = ink.soft;
  to.fillStyle = ink.soft;
  to.lineWidth = 1;
  for (const mm of axisMarks(content.lengthMm, rect.height, 34)) {
    const y = Math.round(rowOf(rect, mm, content.lengthMm)) + 0.5;
    to.beginPath();
    to.moveTo(rect.x + rect.width - 6, y);
    to.lineTo(rect.x + rect.width - 1, y);
    to.stroke();
    // Two digits at most beside the mark; the unit stands once, at the top.
    to.fillText(String(mm), rect.x + rect.width - 9, y);
  }
  to.fillText("mm", rect.x + rect.width - 9, rect.y - 10);
}

function drawProfile(to: CanvasRenderingContext2D, content: StripContent, rect: Rect, ink: StripInk): void {
  const profile = radiusProfile(content.at, content.radii);
  const x = (mm: number) => rect.x + (rect.width * mm) / profile.fullMm;
  const y = (mm: number) => rowOf(rect, mm, content.lengthMm);
  to.strokeStyle = ink.line;
  to.lineWidth = 1;
  to.strokeRect(Math.round(rect.x) + 0.5, rect.y + 0.5, rect.width, rect.height - 1);
  for (const [from, end] of profile.gaps) hatch(to, { ...rect, y: y(end), height: Math.max(2, y(from) - y(end)) }, ink.line);
  to.setLineDash([]);
  to.strokeStyle = ink.trees[content.colour]!;
  to.lineWidth = 2;
  to.lineJoin = "round";
  for (const run of profile.runs) {
    to.beginPath();
    run.at.forEach((at, i) => {
      if (i === 0) to.moveTo(x(run.radii[i]!), y(at));
      else to.lineTo(x(run.radii[i]!), y(at));
    });
    if (run.at.length === 1) to.lineTo(x(run.radii[0]!), y(run.at[0]!) + 1);
    to.stroke();
  }
  if (content.at.length === 0) return;
  to.fillStyle = ink.soft;
  if (rect.width >= 48) {
    to.textAlign = "left";
    to.fillText("0", rect.x, rect.y + rect.height + 11);
  }
  to.textAlign = "right";
  to.fillText(`${profile.fullMm}`, rect.x + rect.width, rect.y + rect.height + 11);
  to.textAlign = "center";
  if (rect.width >= 48) to.fillText("radius", rect.x + rect.width / 2, rect.y - 10);
}

function hatch(to: CanvasRenderingContext2D, rect: Rect, colour: string): void {
  to.save();
  to.beginPath();
  to.rect(rect.x, rect.y, rect.width, rect.height);
  to.clip();
  to.strokeStyle = colour;
  to.lineWidth = 1;
  to.beginPath();
  for (let k = -rect.height; k < rect.width; k += 6) {
    to.moveTo(rect.x + k, rect.y + rect.height);
    to.lineTo(rect.x + k + rect.height, rect.y);
  }
  to.stroke();
  to.restore();
}

/** Stretches that the image does not follow: a bar at the strip's left edge, with end marks. */
function drawFit(to: CanvasRenderingContext2D, content: StripContent, rect: Rect, ink: StripInk): void {
  to.strokeStyle = ink.warn;
  to.lineWidth = 3;
  to.setLineDash([]);
  for (const [from, end] of content.doubtful) {
    const low = rowOf(rect, from, content.lengthMm);
    const high = rowOf(rect, end, content.lengthMm);
    to.beginPath();
    to.moveTo(rect.x + 9, low);
    to.lineTo(rect.x + 2, low);
    to.lineTo(rect.x + 2, high);
    to.lineTo(rect.x + 9, high);
    to.stroke();
  }
}

function drawPins(to: CanvasRenderingContext2D, content: StripContent, rect: Rect, ink: StripInk): void {
  for (const at of content.pins) {
    to.beginPath();
    to.arc(rect.x + rect.width / 2, rowOf(rect, at, content.lengthMm), 3.5, 0, 2 * Math.PI);
    to.strokeStyle = "rgb(0 0 0 / 70%)";
    to.lineWidth = 4;
    to.stroke();
    to.strokeStyle = ink.trees[content.colour]!;
    to.lineWidth = 1.8;
    to.stroke();
  }
}

function drawWords(to: CanvasRenderingContext2D, content: StripContent, layout: StripLayout, ink: StripInk): void {
  const { strip } = layout;
  to.font = `500 12px ${ink.family}`;
  to.textAlign = "center";
  to.fillStyle = ink.ink;
  to.fillText(content.topWord, strip.x + strip.width / 2, strip.y - 10, strip.width);
  to.fillText(content.bottomWord, strip.x + strip.width / 2, strip.y + strip.height + 11, strip.width);
}

function line(to: CanvasRenderingContext2D, layout: StripLayout, y: number, colour: string, width: number, dash: number[]): void {
  const end = layout.profile.x + layout.profile.width;
  to.setLineDash([]);
  to.beginPath();
  to.moveTo(layout.strip.x, y);
  to.lineTo(end, y);
  to.strokeStyle = "rgb(0 0 0 / 60%)";
  to.lineWidth = width + 2;
  to.stroke();
  to.setLineDash(dash);
  to.strokeStyle = colour;
  to.lineWidth = width;
  to.stroke();
  to.setLineDash([]);
}
