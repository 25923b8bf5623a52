/**
 * UTF-8 in and out. The core is compiled without the DOM library, so TextDecoder is not to be had here;
 * only names, remarks and rejected cells ever become strings, so speed does not matter.
 */

const REPLACEMENT = '\uFFFD';

/** Decodes bytes [from, to) as UTF-8; every malformed sequence becomes one U+FFFD. */
export function decodeUtf8(bytes: Uint8Array, from = 0, to = bytes.length): string {
  let text = '';
  let i = from;
  while (i < to) {
    const lead = bytes[i];
    if (lead < 0x80) {
      text += String.fromCharCode(lead);
      i++;
      continue;
    }
    const extra =
      lead >= 0xf0 && lead < 0xf5 ? 3 : lead >= 0xe0 && lead < 0xf0 ? 2 : lead >= 0xc2 && lead < 0xe0 ? 1 : 0;
    let code = extra === 3 ? lead & 0x07 : extra === 2 ? lead & 0x0f : lead & 0x1f;
    let read = 0;
    while (read < extra && i + 1 + read < to && (bytes[i + 1 + read] & 0xc0) === 0x80) {
      code = (code << 6) | (bytes[i + 1 + read] & 0x3f);
      read++;
    }
    const least = extra === 3 ? 0x10000 : extra === 2 ? 0x800 : 0x80;
    const isSurrogate = code >= 0xd800 && code < 0xe000;
    text +=
      extra > 0 && read === extra && code >= least && code <= 0x10ffff && !isSurrogate
        ? String.fromCodePoint(code)
        : REPLACEMENT;
    i += 1 + read;
  }
  return text;
}

/** Encodes a string as UTF-8; a lone surrogate becomes U+FFFD. */
export function encodeUtf8(text: string): Uint8Array {
  const out = new Uint8Array(text.length * 3);
  let n = 0;
  for (const character of text) {
    let code = character.codePointAt(0) as number;
    if (code >= 0xd800 && code < 0xe000) code = 0xfffd;
    if (code < 0x80) out[n++] = code;
    else if (code < 0x800) {
      out[n++] = 0xc0 | (code >> 6);
      out[n++] = 0x80 | (code & 0x3f);
    } else if (code < 0x10000) {
      out[n++] = 0xe0 | (code >> 12);
      out[n++] = 0x80 | ((code >> 6) & 0x3f);
      out[n++] = 0x80 | (code & 0x3f);
    } else {
      out[n++] = 0xf0 | (code >> 18);
      out[n++] = 0x80 | ((code >> 12) & 0x3f);
      out[n++] = 0x80 | ((code >> 6) & 0x3f);
      out[n++] = 0x80 | (code & 0x3f);
    }
  }
  return out.subarray(0, n);
}
