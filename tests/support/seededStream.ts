/** A stream of random numbers that a seed fixes. */
export interface SeededStream {
  /** Uniform in [0, 1). */
  uniform(): number;
  /** Standard normal. */
  normal(): number;
}

/** Mulberry32 for the uniform numbers (from memory, public domain), Box-Muller for the normal ones. */
export function createSeededStream(seed: number): SeededStream {
  let state = seed >>> 0;
  let spare = Number.NaN;
  const uniform = (): number => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
  return {
    uniform,
    normal() {
      if (!Number.isNaN(spare)) {
        const kept = spare;
        spare = Number.NaN;
        return kept;
      }
      const r = Math.sqrt(-2 * Math.log(1 - uniform()));
      const angle = 2 * Math.PI * uniform();
      spare = r * Math.sin(angle);
      return r * Math.cos(angle);
    },
  };
}
