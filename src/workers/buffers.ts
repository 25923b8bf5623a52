/** The buffers of every typed array inside a value, each once, so that they are handed over and not copied. */
export function buffersOf(value: unknown, found: Set<ArrayBuffer> = new Set()): ArrayBuffer[] {
  if (ArrayBuffer.isView(value)) {
    if (value.buffer instanceof ArrayBuffer) found.add(value.buffer);
  } else if (typeof value === 'object' && value !== null) {
    for (const inner of Object.values(value)) buffersOf(inner, found);
  }
  return [...found];
}
