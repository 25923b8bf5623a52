import { describe, expect, it } from 'vitest';
import {
  compileSpectrum,
  heightOf,
  ittcConstants,
  jonswapShare,
  jonswapShareByFormula,
  meanPeriods,
  PEAK_OVER_MEAN,
  PEAK_OVER_ZERO_CROSSING,
  peakFrequencyOf,
  seaOfWind,
  spectralMoment,
  type WaveSpectrum,
} from '../../../src/core/physics/waveSpectra';
import {
  encounterFrequency,
  greatestHeightRatio,
  highestShareRatio,
  SEA_STATE_HEIGHTS,
  seaElevation,
  seaSlope,
  seaStateOf,
  splitSea,
  waveLength,
  waveNumber,
  waveSlope,
  waveSpeed,
} from '../../../src/core/physics/waves';
import { expectClose } from '../../support/closeTo';

const DEGREE = Math.PI / 180;

/** A draw for tests: a linear congruential sequence. */
const drawFrom = (seed: number) => {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
};

const SPECTRA: readonly WaveSpectrum[] = [
  { kind: 'bretschneider', height: 1.2, peakPeriod: 5 },
  { kind: 'ittc', height: 0.4, meanPeriod: 3 },
  { kind: 'wind', windSpeed: 10 },
  { kind: 'jonswap', height: 0.6, peakPeriod: 4, gamma: 3.3 },
];

describe('deep-water waves', () => {
  it('6 s: 56.19 m long, 9.365 m/s, Airy', () => {
    expectClose([waveLength(6), waveSpeed(6)], [56.1879656, 9.36466094], { rel: 5e-9 }); // measured 4.2e-10
    expectClose(waveNumber((2 * Math.PI) / 6), (2 * Math.PI) / waveLength(6), { rel: 1e-14 }); // measured 1.2e-16
    expectClose(waveSlope(0.5, 6), (0.25 * 2 * Math.PI) / waveLength(6), { rel: 1e-14 }); // measured 0
  });

  it('encounter frequency by heading, both ends, Lloyd 1989; Tupper', () => {
    const met = [0, 45, 90, 135, 180].map((heading) => encounterFrequency(0.6, 10, heading * DEGREE, 9.81));
    expectClose(met, [0.233027523, 0.340511273, 0.6, 0.859488727, 0.966972477], { rel: 5e-9 }); // measured 2.9e-10
    expect(encounterFrequency(3, 10, 0)).toBeLessThan(0);
  });

  it('sea states, WMO table 3700: a height on a bound takes the lower state', () => {
    expect(SEA_STATE_HEIGHTS).toEqual([0, 0.1, 0.5, 1.25, 2.5, 4, 6, 9, 14]);
    expect([0, 0.05, 0.1, 0.11, 0.5, 1.25, 2, 14, 14.1].map(seaStateOf)).toEqual([0, 1, 1, 2, 2, 3, 4, 8, 9]);
  });

  it('extremes, Longuet-Higgins 1952', () => {
    expectClose(greatestHeightRatio(1000), 1.85846109, { rel: 5e-9 }); // measured 2.4e-9
    expectClose(highestShareRatio(10), 1.27273427, { rel: 5e-9 }); // measured 2.6e-9
    expectClose(highestShareRatio(10) / highestShareRatio(3), 1.27136662, { rel: 5e-9 }); // measured 2.1e-9
    // Far out, against the mean of the Rayleigh tail by quadrature.
    const n = 1e6;
    const start = Math.sqrt(Math.log(n));
    let tail = 0;
    for (let i = 0; i < 20000; i++) {
      const x = start + (8 * (i + 0.5)) / 20000;
      tail += (x * 2 * x * Math.exp(-x * x) * 8) / 20000;
    }
    expectClose(highestShareRatio(n), (n * tail) / Math.SQRT2, { rel: 1e-6 }); // measured 3.3e-7
  });
});

describe('wave spectra', () => {
  it('period ratios, ITTC; DNV-RP-C205', () => {
    expectClose(PEAK_OVER_ZERO_CROSSING, 1.40771576, { rel: 5e-9 }); // measured 3.1e-9
    expectClose(PEAK_OVER_MEAN, 1.29572042, { rel: 2e-8 }); // measured 1e-8
    expectClose(PEAK_OVER_ZERO_CROSSING / PEAK_OVER_MEAN, 1.0864348, { rel: 5e-8 }); // measured 1e-8
    const { T1, Tz } = meanPeriods({ kind: 'bretschneider', height: 2, peakPeriod: 8 });
    expectClose([8 / Tz, 8 / T1], [1.40771576, 1.29572042], { rel: 1e-7 }); // measured 1e-8
  });

  it('ITTC constants are the unrounded 173 and 691', () => {
    const { A, B } = ittcConstants(1, 1);
    expectClose([A, B], [172.792261, 691.169042], { rel: 5e-8 }); // measured 3.2e-8
    expectClose([A, B], [173, 691], { rel: 0.002 }); // measured 1.2e-3
    expectClose(spectralMoment({ kind: 'ittc', height: 1, meanPeriod: 3 }, 0), 0.0625, { rel: 1e-7 }); // measured 3e-13
    const density = compileSpectrum({ kind: 'ittc', height: 1.5, meanPeriod: 4 });
    const w = 1.9;
    const of = ittcConstants(1.5, 4);
    expectClose(density(w), of.A * w ** -5 * Math.exp(-of.B / w ** 4), { rel: 1e-12 }); // measured 0
  });

  it('Pierson-Moskowitz by wind of 15 m/s, JGR 69 (1964)', () => {
    const sea = seaOfWind(15);
    expectClose([sea.height, sea.peakFrequency, sea.peakPeriod], [4.80085388, 0.573468864, 10.9564541], {
      rel: 5e-9, // measured 3.4e-9
    });
    expectClose(
      [(sea.height * 9.80665) / 225, (sea.peakFrequency * 15) / 9.80665],
      [0.20924575, 0.877163247],
      {
        rel: 5e-9, // measured 1.2e-9
      },
    );
    const density = compileSpectrum({ kind: 'wind', windSpeed: 15 });
    const w = 0.8;
    const direct = 0.0081 * 9.80665 ** 2 * w ** -5 * Math.exp(-0.74 * (9.80665 / (15 * w)) ** 4);
    expectClose(density(w), direct, { rel: 1e-12 }); // measured 3.9e-16
  });

  it('JONSWAP share, Hasselmann et al. 1973; DNV-RP-C205', () => {
    const gammas = [1, 2, 3.3, 5, 7];
    expectClose(gammas.map(jonswapShare), [1, 0.80281024, 0.65575984, 0.53808989, 0.44940404], { rel: 1e-6 }); // measured 7.9e-8
    expectClose(gammas.map(jonswapShareByFormula), [1, 0.80106676, 0.65734425, 0.53809132, 0.44152379], {
      rel: 1e-7, // measured 6.3e-9
    });
    for (const gamma of [2, 3.3, 5]) {
      expectClose(jonswapShareByFormula(gamma), jonswapShare(gamma), { rel: 0.003 }); // measured 2.4e-3
    }
    expectClose(jonswapShareByFormula(7), jonswapShare(7), { rel: 0.018 }); // measured 1.8e-2
  });

  it('peaks of a 1 m, 10 s sea in m2/Hz: 0.8953 plain, 1.942 peaked with the share by formula', () => {
    const peak = (2 * Math.PI) / 10;
    const plain = compileSpectrum({ kind: 'bretschneider', height: 1, peakPeriod: 10 });
    expectClose(2 * Math.PI * plain(peak), 0.895327, { rel: 1e-6 }); // measured 5.6e-7
    const peaked = compileSpectrum({ kind: 'jonswap', height: 1, peakPeriod: 10, gamma: 3.3 });
    const byFormula = (2 * Math.PI * peaked(peak) * jonswapShareByFormula(3.3)) / jonswapShare(3.3);
    expectClose(byFormula, 1.94218, { rel: 1e-5 }); // measured 1.7e-6
  });

  it('every kind has the height it was given: 4 sqrt(m0)', () => {
    for (const spectrum of SPECTRA) {
      expectClose(
        4 * Math.sqrt(spectralMoment(spectrum, 0)),
        heightOf(spectrum),
        { rel: 1e-6 }, // measured 2.6e-11
        spectrum.kind,
      );
      const density = compileSpectrum(spectrum);
      const peak = peakFrequencyOf(spectrum);
      expect(density(peak)).toBeGreaterThan(density(peak * 1.02));
      expect(density(peak)).toBeGreaterThan(density(peak * 0.98));
      expect(density(0)).toBe(0);
    }
  });
});

describe('a random sea', () => {
  it('keeps the energy of its spectrum and comes again from the same draw', () => {
    for (const spectrum of SPECTRA) {
      const sea = splitSea(spectrum, 120, drawFrom(7));
      let energy = 0;
      for (const a of sea.amplitude) energy += (a * a) / 2;
      expectClose(4 * Math.sqrt(energy), heightOf(spectrum), { rel: 1e-5 }); // measured 2.3e-8
      expect(splitSea(spectrum, 120, drawFrom(7))).toEqual(sea);
      expect(splitSea(spectrum, 120, drawFrom(8)).phase[0]).not.toBe(sea.phase[0]);
    }
  });

  it('sampled over a long time has the variance and the mean crossing period of its spectrum', () => {
    const spectrum: WaveSpectrum = { kind: 'jonswap', height: 0.6, peakPeriod: 4, gamma: 3.3 };
    const sea = splitSea(spectrum, 100, drawFrom(3));
    let sum = 0;
    let crossings = 0;
    const n = 30000;
    const dt = 0.2;
    let before = seaElevation(sea, 0, 0);
    for (let i = 1; i <= n; i++) {
      const here = seaElevation(sea, i * dt, 0);
      sum += here * here;
      if (before < 0 && here >= 0) crossings++;
      before = here;
    }
    expectClose(4 * Math.sqrt(sum / n), 0.6, { rel: 0.02 }); // measured 1.6e-2
    expectClose((n * dt) / crossings, meanPeriods(spectrum).Tz, { rel: 0.08 }); // measured 4.2e-2
  });

  it('slopes as its elevation changes along the way', () => {
    const sea = splitSea(SPECTRA[0]!, 50, drawFrom(5));
    const h = 1e-5;
    for (const [t, x] of [
      [0, 0],
      [3.3, 7],
      [100, -20],
    ] as const) {
      const difference = (seaElevation(sea, t, x + h) - seaElevation(sea, t, x - h)) / (2 * h);
      expectClose(seaSlope(sea, t, x), difference, { abs: 1e-8 }); // measured 4.4e-10
    }
  });
});
