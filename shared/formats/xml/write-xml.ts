/** A tag with its attributes and what is inside it; attributes that are undefined are left out. */
export function xmlTag(name: string, attributes: Readonly<Record<string, string | number | undefined>>, inside = ""): string {
  const list = Object.entries(attributes).flatMap(([key, value]) =>
    value === undefined ? [] : [` ${key}="${xmlText(String(value))}"`],
  );
  return inside === "" ? `<${name}${list.join("")}/>` : `<${name}${list.join("")}>${inside}</${name}>`;
}

/** Text for element content and attribute values. Characters that XML 1.0 cannot hold become U+FFFD. */
export function xmlText(text: string): string {
  return text
    .replace(/[\uD800-\uDBFF](?![\uDC00-\uDFFF])|(?<![\uD800-\uDBFF])[\uDC00-\uDFFF]/g, "\uFFFD")
    .replace(/&/g, "&amp;")
    .replace(/</g, "&lt;")
    .replace(/>/g, "&gt;")
    .replace(/"/g, "&quot;")
    .replace(/[\p{Cc}\uFFFE\uFFFF]/gu, (c) => ("\t\n\r".includes(c) ? `&#${c.charCodeAt(0)};` : "\uFFFD"));
}
