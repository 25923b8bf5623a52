/**
 * One seeded generator for everything random in the core: xoshiro128** (Blackman and Vigna, Scrambled
 * linear pseudorandom number generators, ACM TOMS 47, 2021). A stream is named by (seed, run, channel), so
 * the numbers of run 17 are the same whichever worker draws them and in whatever order the runs are made.
 */
export type RandomState = Uint32Array;

/** The bit mixer of MurmurHash3 (Appleby, public domain): every input bit reaches every output bit. */
const mix = (value: number): number => {
  let h = value | 0;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) >>> 0;
};

/**
 * Names a stream: writes the state that belongs to (seed, run, channel) into `state`.
 *
 * @param state   5 words, overwritten: the generator's four and its last output
 * @param seed    any safe integer
 * @param run     0-based index of the run
 * @param channel one per independent source within a run (gyro, accelerometer, sea, tolerances)
 *
 * O(1), allocates nothing.
 */
export function seedRandom(state: RandomState, seed: number, run = 0, channel = 0): void {
  if (!Number.isSafeInteger(seed)) throw new Error(`seed must be a whole number, got ${seed}`);
  const high = Math.floor(seed / 4294967296);
  let h = mix(seed ^ 0x9e3779b9);
  h = mix(h ^ mix(high + 0x7f4a7c15));
  h = mix(h ^ mix(run + 0x3c6ef372));
  h = mix(h ^ mix(channel + 0xdaa66d2b));
  for (let i = 0; i < 4; i++) {
    h = (h + 0x9e3779b9) >>> 0;
    state[i] = mix(h);
  }
  if ((state[0]! | state[1]! | state[2]! | state[3]!) === 0) state[0] = 1;
}

/** A new stream for (seed, run, channel). The only allocation of this file. */
export function createRandom(seed: number, run = 0, channel = 0): RandomState {
  const state = new Uint32Array(5);
  seedRandom(state, seed, run, channel);
  return state;
}

/** The next 32 bits as an unsigned integer. */
export function drawBits(state: RandomState): number {
  advance(state);
  return state[4]!;
}

/* The output stays in the state: handed back as a number it would be boxed, being too large for a small integer. */
function advance(s: RandomState): void {
  const scrambled = Math.imul(s[1]!, 5);
  s[4] = Math.imul((scrambled << 7) | (scrambled >>> 25), 9);
  const t = s[1]! << 9;
  s[2]! ^= s[0]!;
  s[3]! ^= s[1]!;
  s[1]! ^= s[2]!;
  s[0]! ^= s[3]!;
  s[2]! ^= t;
  s[3] = (s[3]! << 11) | (s[3]! >>> 21);
}

/** Uniform in [0, 1), 53 bits. */
export function drawUniform(state: RandomState): number {
  advance(state);
  const high = state[4]! >>> 5;
  advance(state);
  return (high * 67108864 + (state[4]! >>> 6)) / 9007199254740992;
}

/** Uniform whole number in [0, count), without bias (Lemire, ACM TOMACS 29, 2019, by rejection). */
export function drawInteger(state: RandomState, count: number): number {
  if (!(Number.isInteger(count) && count >= 1 && count <= 4294967296)) {
    throw new Error(`count must be a whole number from 1 to 2^32, got ${count}`);
  }
  const limit = 4294967296 - (4294967296 % count);
  let bits = drawBits(state);
  while (bits >= limit) bits = drawBits(state);
  return bits % count;
}

/* Ziggurat of 128 layers; layer 0 is the base strip that holds the tail beyond x = R. */
const LAYERS = 128;
const TAIL_START = 3.442619855899;
const LAYER_AREA = 9.91256303526217e-3;
const layerX = new Float64Array(LAYERS + 1);
const layerRatio = new Float64Array(LAYERS);
{
  let density = Math.exp(-0.5 * TAIL_START * TAIL_START);
  layerX[0] = LAYER_AREA / density;
  layerX[1] = TAIL_START;
  for (let i = 2; i < LAYERS; i++) {
    layerX[i] = Math.sqrt(-2 * Math.log(LAYER_AREA / layerX[i - 1]! + density));
    density = Math.exp(-0.5 * layerX[i]! * layerX[i]!);
  }
  layerX[LAYERS] = 0;
  for (let i = 0; i < LAYERS; i++) layerRatio[i] = layerX[i + 1]! / layerX[i]!;
}

/** A standard normal draw (mean 0, variance 1). */
export function drawNormal(state: RandomState): number {
  fillNormal(state, single, 0);
  return single[0]!;
}

const single = new Float64Array(1);

/**
 * A standard normal draw into out[at].
 *
 * Ziggurat with a separate draw for the layer (Doornik, An improved ziggurat method to generate normal
 * random samples, 2005), which avoids the correlation of the one-draw form. Allocates nothing.
 */
export function fillNormal(state: RandomState, out: Float64Array, at: number): void {
  for (;;) {
    advance(state);
    const u = (state[4]! + 0.5) / 2147483648 - 1;
    advance(state);
    const layer = state[4]! & (LAYERS - 1);
    const x = u * layerX[layer]!;
    if (Math.abs(u) < layerRatio[layer]!) {
      out[at] = x;
      return;
    }
    if (layer === 0) {
      fillTail(state, out, at);
      if (u < 0) out[at] = -out[at]!;
      return;
    }
    const f0 = Math.exp(-0.5 * (layerX[layer]! * layerX[layer]! - x * x));
    const f1 = Math.exp(-0.5 * (layerX[layer + 1]! * layerX[layer + 1]! - x * x));
    if (f1 + drawUniform(state) * (f0 - f1) < 1) {
      out[at] = x;
      return;
    }
  }
}

/* A draw from beyond the last layer (Marsaglia, 1964). */
function fillTail(state: RandomState, out: Float64Array, at: number): void {
  for (;;) {
    const x = -Math.log(1 - drawUniform(state)) / TAIL_START;
    const y = -Math.log(1 - drawUniform(state));
    if (y + y >= x * x) {
      out[at] = TAIL_START + x;
      return;
    }
  }
}
