/** Elements that drawings are made of; nothing that runs, loads or styles. */
const ELEMENTS = new Set([
  "svg",
  "g",
  "title",
  "text",
  "tspan",
  "line",
  "polyline",
  "polygon",
  "path",
  "rect",
  "circle",
  "ellipse",
]);

const NAMESPACE = "http://www.w3.org/2000/svg";

/**
 * A drawing of the report as an element of the page. It is read as XML and taken over element by element: what is not a plain
 * part of a drawing is left out, so that no text of a report can ever act.
 * @param svg whole SVG text. @returns null when it cannot be read as a drawing.
 */
export function drawingOf(svg: string): SVGSVGElement | null {
  const read = new DOMParser().parseFromString(svg, "image/svg+xml");
  const root: Element | null = read.documentElement;
  if (root?.localName !== "svg" || read.querySelector("parsererror") !== null) return null;
  return copied(root) as SVGSVGElement;
}

function copied(from: Element): Element {
  const to = document.createElementNS(NAMESPACE, from.localName);
  for (const { name, value } of from.attributes) if (isPlain(name, value)) to.setAttribute(name, value);
  for (const child of from.childNodes) {
    if (child.nodeType === Node.TEXT_NODE) to.append(child.textContent ?? "");
    else if (child.nodeType === Node.ELEMENT_NODE && ELEMENTS.has((child as Element).localName))
      to.append(copied(child as Element));
  }
  return to;
}

function isPlain(name: string, value: string): boolean {
  return !name.startsWith("on") && !name.startsWith("xmlns") && !/^(xlink:)?href$|^style$/.test(name) && !value.includes("url(");
}
