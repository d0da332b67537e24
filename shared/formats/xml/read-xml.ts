import { XMLParser, XMLValidator } from "fast-xml-parser";
import { unreadable } from "#shared/errors.ts";

/** An element without its namespace prefix; children in document order, text as it stands between tags. */
export interface XmlElement {
  readonly name: string;
  readonly attributes: Readonly<Record<string, string>>;
  readonly children: readonly (XmlElement | string)[];
}

/** Larger than any valve's trees by two orders of magnitude. */
const LARGEST_TEXT = 256 * 1024 * 1024;
const DEEPEST_NESTING = 100;

/**
 * The root element of an XML text. Declarations that could pull in or multiply other text (DOCTYPE, entities) are refused
 * before anything is parsed; only the five entities of XML itself and character numbers are known.
 * @throws unreadable-input for text that is too large, has a DOCTYPE or is not well-formed.
 */
export function readXml(text: string, fileName: string): XmlElement {
  if (text.length > LARGEST_TEXT) throw unreadable(fileName, `at most ${LARGEST_TEXT} characters of XML`, `${text.length}`);
  if (text.trim() === "") throw unreadable(fileName, "an XML file", "an empty file");
  if (/<!(?!--|\[CDATA\[)/.test(text))
    throw unreadable(fileName, "XML without a DOCTYPE", "a DOCTYPE or entity declaration", undefined, "Remove it and try again.");
  const verdict = XMLValidator.validate(text);
  if (verdict !== true)
    throw unreadable(fileName, "well-formed XML", verdict.err.msg, `line ${verdict.err.line}, column ${verdict.err.col}`);
  let parsed: unknown;
  try {
    parsed = new XMLParser(OPTIONS).parse(text);
  } catch (error) {
    throw unreadable(fileName, "well-formed XML", (error as Error).message);
  }
  const root = childrenOf(parsed, fileName, 0).find((child): child is XmlElement => typeof child !== "string");
  if (!root) throw unreadable(fileName, "an XML element", "none");
  return root;
}

const OPTIONS = {
  preserveOrder: true,
  ignoreAttributes: false,
  attributeNamePrefix: "",
  parseTagValue: false,
  parseAttributeValue: false,
  trimValues: false,
  removeNSPrefix: true,
  ignoreDeclaration: true,
  ignorePiTags: true,
  processEntities: true,
  htmlEntities: false,
  maxNestedTags: DEEPEST_NESTING,
} as const;

/** The library's ordered form: a list of objects, each with one key for the tag and `:@` for its attributes. */
function childrenOf(list: unknown, fileName: string, depth: number): (XmlElement | string)[] {
  if (!Array.isArray(list)) return [];
  if (depth > DEEPEST_NESTING) throw unreadable(fileName, `nesting up to ${DEEPEST_NESTING} levels`, "deeper nesting");
  return list.flatMap((entry: Record<string, unknown>): (XmlElement | string)[] => {
    const name = Object.keys(entry).find((key) => key !== ":@");
    if (name === undefined) return [];
    if (name === "#text") return [String(entry["#text"])];
    const attributes = (entry[":@"] ?? {}) as Record<string, string>;
    return [{ name, attributes, children: childrenOf(entry[name], fileName, depth + 1) }];
  });
}

/** Child elements of a name, in order. */
export function childElements(element: XmlElement, name: string): XmlElement[] {
  return element.children.filter((child): child is XmlElement => typeof child !== "string" && child.name === name);
}

/** All text directly inside an element. */
export function textOf(element: XmlElement): string {
  return element.children.filter((child) => typeof child === "string").join("");
}
