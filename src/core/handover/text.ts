/** Text on its way out of the program: bytes, names that any reader takes, and what must be escaped. */

/**
 * UTF-8 bytes of a text; a lone surrogate becomes U+FFFD. The core has no TextEncoder.
 *
 * O(length). Source: RFC 3629.
 */
export function encodeUtf8(text: string): Uint8Array {
  const bytes: number[] = [];
  for (const letter of text) {
    let code = letter.codePointAt(0) as number;
    if (code >= 0xd800 && code <= 0xdfff) code = 0xfffd;
    if (code < 0x80) bytes.push(code);
    else if (code < 0x800) bytes.push(0xc0 | (code >> 6), 0x80 | (code & 63));
    else if (code < 0x10000) bytes.push(0xe0 | (code >> 12), 0x80 | ((code >> 6) & 63), 0x80 | (code & 63));
    else {
      bytes.push(0xf0 | (code >> 18), 0x80 | ((code >> 12) & 63));
      bytes.push(0x80 | ((code >> 6) & 63), 0x80 | (code & 63));
    }
  }
  return Uint8Array.from(bytes);
}

const ENTITIES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

/** A text fit for XML and HTML, in an element or a quoted attribute; what XML cannot hold at all is left out. */
export const escapeXml = (text: string): string =>
  text
    .replace(/(?![\t\n\r])\p{Cc}|[\ufffe\uffff]/gu, '')
    .replace(/[&<>"']/g, (letter) => ENTITIES[letter] as string);

/** Accents taken off, everything else but Latin letters and digits turned into one mark. */
const plain = (title: string, mark: string): string =>
  title
    .normalize('NFKD')
    .replace(/[\u0300-\u036f]/g, '')
    .replace(/[^A-Za-z0-9]+/g, mark)
    .replace(new RegExp(`^${mark}+|${mark}+$`, 'g'), '')
    .toLowerCase();

/** A name for a C identifier, made of a title: never empty, never starting with a digit. */
export function identifierFor(title: string, fallback: string): string {
  const name = plain(title, '_').slice(0, 40) || fallback;
  return /^[0-9]/.test(name) ? `${fallback}_${name}` : name;
}

/** Names of files and links: letters, digits and hyphens. */
export const fileStem = (title: string, fallback = 'rig'): string =>
  plain(title, '-').slice(0, 60) || fallback;

/** Names made one of a kind by a number behind those that come again. */
export function makeUnique(names: readonly string[]): readonly string[] {
  const taken = new Set<string>();
  return names.map((name) => {
    let unique = name;
    for (let k = 2; taken.has(unique); k++) unique = `${name}_${k}`;
    taken.add(unique);
    return unique;
  });
}

/** A number with a point and as many digits as asked; no unit, no exponent where none is needed. */
export const plainNumber = (value: number, digits = 9): string => String(Number(value.toPrecision(digits)));
