/** Writes XML elements as text, escaped. */

const escapes: Record<string, string> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  '\n': '&#10;',
  '\r': '&#13;',
  '\t': '&#9;',
};

/** Attribute text; characters that XML cannot hold at all are left out. */
const escaped = (text: string): string =>
  text
    // eslint-disable-next-line no-control-regex
    .replaceAll(
      /[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]|[\ud800-\udbff](?![\udc00-\udfff])|(?<![\ud800-\udbff])[\udc00-\udfff]/g,
      '',
    )
    .replaceAll(/[&<>"\n\r\t]/g, (character) => escapes[character]!);

/** One element; attributes that are undefined are left out, and so are empty children. */
export function element(name: string, attributes: Record<string, string | undefined>, children: string[] = []): string {
  const written = Object.entries(attributes)
    .filter((entry): entry is [string, string] => entry[1] !== undefined)
    .map(([key, value]) => ` ${key}="${escaped(value)}"`)
    .join('');
  const content = children.filter((child) => child !== '');
  return content.length === 0 ? `<${name}${written}/>` : `<${name}${written}>\n${content.join('\n')}\n</${name}>`;
}

/** A list element, or nothing when it would be empty. */
export const list = (name: string, children: string[]): string =>
  children.length === 0 ? '' : element(name, {}, children);

/** `wanted`, or the first of wanted_2, wanted_3 … that is not taken. */
export function freeId(wanted: string, taken: ReadonlySet<string>): string {
  let id = wanted;
  for (let number = 2; taken.has(id); number++) id = `${wanted}_${number}`;
  return id;
}
