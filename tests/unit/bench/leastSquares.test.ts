import { describe, expect, it } from 'vitest';
import { fitLeastSquares } from '../../../src/core/bench/leastSquares';
import { studentQuantile } from '../../../src/core/bench/statistics';
import { expectClose } from '../../support/closeTo';

/**
 * NIST Statistical Reference Datasets, nonlinear regression (https://www.itl.nist.gov/div898/strd/), data and
 * certified values from memory of NIST StRD. That a fit reproduces the certified parameters, their standard
 * deviations and the residual sum of squares shows the data were recalled right.
 */
interface ReferenceSet {
  readonly name: string;
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly model: (b: Float64Array, x: number) => number;
  readonly starts: readonly (readonly number[])[];
  readonly certified: readonly number[];
  readonly deviations: readonly number[];
  readonly sumOfSquares: number;
}

const misraX = [
  77.6, 114.9, 141.1, 190.8, 239.9, 289.0, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760.0,
];
const misraY = [
  10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.4, 75.47, 81.78,
];

const sets: readonly ReferenceSet[] = [
  {
    name: 'Misra1a',
    x: misraX,
    y: misraY,
    model: (b, x) => b[0] * (1 - Math.exp(-b[1] * x)),
    starts: [
      [500, 1e-4],
      [250, 5e-4],
    ],
    certified: [2.3894212918e2, 5.5015643181e-4],
    deviations: [2.7070075241, 7.2668688436e-6],
    sumOfSquares: 1.2455138894e-1,
  },
  {
    name: 'Misra1b',
    x: misraX,
    y: misraY,
    model: (b, x) => b[0] * (1 - (1 + (b[1] * x) / 2) ** -2),
    starts: [
      [500, 1e-4],
      [300, 2e-4],
    ],
    certified: [3.3799746163e2, 3.9039091287e-4],
    deviations: [3.1643950207, 4.2547321834e-6],
    sumOfSquares: 7.5464681533e-2,
  },
  {
    name: 'Misra1c',
    x: misraX,
    y: misraY,
    model: (b, x) => b[0] * (1 - (1 + 2 * b[1] * x) ** -0.5),
    starts: [
      [500, 1e-4],
      [600, 2e-4],
    ],
    certified: [6.3642725809e2, 2.0813627256e-4],
    deviations: [4.6638326572, 1.7728423155e-6],
    sumOfSquares: 4.0966836971e-2,
  },
  {
    name: 'Misra1d',
    x: misraX,
    y: misraY,
    model: (b, x) => (b[0] * b[1] * x) / (1 + b[1] * x),
    starts: [
      [500, 1e-4],
      [450, 3e-4],
    ],
    certified: [4.3736970754e2, 3.0227324449e-4],
    deviations: [3.6489174345, 2.9334354479e-6],
    sumOfSquares: 5.6419295283e-2,
  },
  {
    name: 'DanWood',
    x: [1.309, 1.471, 1.49, 1.565, 1.611, 1.68],
    y: [2.138, 3.421, 3.597, 4.34, 4.882, 5.66],
    model: (b, x) => b[0] * x ** b[1],
    starts: [
      [1, 5],
      [0.7, 4],
    ],
    certified: [7.6886226176e-1, 3.8604055871],
    deviations: [1.828197386e-2, 5.1726610913e-2],
    sumOfSquares: 4.3173084083e-3,
  },
  {
    name: 'BoxBOD',
    x: [1, 2, 3, 5, 7, 10],
    y: [109, 149, 149, 191, 213, 224],
    model: (b, x) => b[0] * (1 - Math.exp(-b[1] * x)),
    starts: [[100, 0.75]],
    certified: [2.1380940889e2, 5.4723748542e-1],
    deviations: [1.2354515176e1, 1.0455993237e-1],
    sumOfSquares: 1.1680088766e3,
  },
  {
    name: 'Rat42',
    x: [9, 14, 21, 28, 42, 57, 63, 70, 79],
    y: [8.93, 10.8, 18.59, 22.33, 39.35, 56.11, 61.73, 64.62, 67.08],
    model: (b, x) => b[0] / (1 + Math.exp(b[1] - b[2] * x)),
    starts: [
      [100, 1, 0.1],
      [75, 2.5, 0.07],
    ],
    certified: [7.2462237576e1, 2.6180768402, 6.7359200066e-2],
    deviations: [1.7340283401, 8.8295217536e-2, 3.4465663377e-3],
    sumOfSquares: 8.0565229338,
  },
  {
    name: 'Rat43',
    x: Array.from({ length: 15 }, (_, i) => i + 1),
    y: [
      16.08, 33.83, 65.8, 97.2, 191.55, 326.2, 386.87, 520.53, 590.03, 651.92, 724.93, 699.56, 689.96, 637.56,
      717.41,
    ],
    model: (b, x) => b[0] / (1 + Math.exp(b[1] - b[2] * x)) ** (1 / b[3]),
    starts: [
      [100, 10, 1, 1],
      [700, 5, 0.75, 1.3],
    ],
    certified: [6.996415127e2, 5.2771253025, 7.5962938329e-1, 1.2792483859],
    deviations: [1.6302297817e1, 2.0828735829, 1.9566123451e-1, 6.8761936385e-1],
    sumOfSquares: 8.786404908e3,
  },
  {
    name: 'MGH17',
    x: Array.from({ length: 33 }, (_, i) => 10 * i),
    y: [
      0.844, 0.908, 0.932, 0.936, 0.925, 0.908, 0.881, 0.85, 0.818, 0.784, 0.751, 0.718, 0.685, 0.658, 0.628,
      0.603, 0.58, 0.558, 0.538, 0.522, 0.506, 0.49, 0.478, 0.467, 0.457, 0.448, 0.438, 0.431, 0.424, 0.42,
      0.414, 0.411, 0.406,
    ],
    model: (b, x) => b[0] + b[1] * Math.exp(-x * b[3]) + b[2] * Math.exp(-x * b[4]),
    starts: [[0.5, 1.5, -1, 0.01, 0.02]],
    certified: [3.7541005211e-1, 1.9358469127, -1.4646871366, 1.286753464e-2, 2.2122699662e-2],
    deviations: [2.0723153551e-3, 2.2031669222e-1, 2.2175707739e-1, 4.4861358114e-4, 8.9471996575e-4],
    sumOfSquares: 5.4648946975e-5,
  },
  {
    name: 'Eckerle4',
    x: [
      400, 405, 410, 415, 420, 425, 430, 435, 436.5, 438, 439.5, 441, 442.5, 444, 445.5, 447, 448.5, 450,
      451.5, 453, 454.5, 456, 457.5, 459, 460.5, 462, 463.5, 465, 470, 475, 480, 485, 490, 495, 500,
    ],
    y: [
      0.0001575, 0.0001699, 0.000235, 0.0003102, 0.0004917, 0.000871, 0.0017418, 0.00464, 0.0065895,
      0.0097302, 0.0149002, 0.023731, 0.0401683, 0.0712559, 0.1264458, 0.2073413, 0.2902366, 0.3445623,
      0.3698049, 0.3668534, 0.3106727, 0.2078154, 0.1164354, 0.0616764, 0.03372, 0.0194023, 0.0117831,
      0.0074357, 0.0022732, 0.00088, 0.0004579, 0.0002345, 0.0001586, 0.0001143, 0.000071,
    ],
    model: (b, x) => (b[0] / b[1]) * Math.exp(-0.5 * ((x - b[2]) / b[1]) ** 2),
    starts: [[1.5, 5, 450]],
    certified: [1.5543827178, 4.0888321754, 4.5154121844e2],
    deviations: [1.5408051163e-2, 4.6803020753e-2, 4.6800518816e-2],
    sumOfSquares: 1.4635887487e-3,
  },
  {
    name: 'Thurber',
    x: [
      -3.067, -2.981, -2.921, -2.912, -2.84, -2.797, -2.702, -2.699, -2.633, -2.481, -2.363, -2.322, -1.501,
      -1.46, -1.274, -1.212, -1.1, -1.046, -0.915, -0.714, -0.566, -0.545, -0.4, -0.309, -0.109, -0.103, 0.01,
      0.119, 0.377, 0.79, 0.963, 1.006, 1.115, 1.572, 1.841, 2.047, 2.2,
    ],
    y: [
      80.574, 84.248, 87.264, 87.195, 89.076, 89.608, 89.868, 90.101, 92.405, 95.854, 100.696, 101.06,
      401.672, 390.724, 567.534, 635.316, 733.054, 759.087, 894.206, 990.785, 1090.109, 1080.914, 1122.643,
      1178.351, 1260.531, 1273.514, 1288.339, 1327.543, 1353.863, 1414.509, 1425.208, 1421.384, 1442.962,
      1464.35, 1468.705, 1447.894, 1457.628,
    ],
    model: (b, x) => (b[0] + x * (b[1] + x * (b[2] + x * b[3]))) / (1 + x * (b[4] + x * (b[5] + x * b[6]))),
    starts: [
      [1000, 1000, 400, 40, 0.7, 0.3, 0.03],
      [1300, 1500, 500, 75, 1, 0.4, 0.05],
    ],
    certified: [
      1.28813968e3, 1.4910792535e3, 5.8323836877e2, 7.5416644291e1, 9.6629502864e-1, 3.9797285797e-1,
      4.9727297349e-2,
    ],
    deviations: [
      4.6647963344, 3.9571156086e1, 2.8698696102e1, 5.567537027, 3.1333340687e-2, 1.4984928198e-2,
      6.5842344623e-3,
    ],
    sumOfSquares: 5.6427082397e3,
  },
  {
    name: 'Lanczos3',
    x: Array.from({ length: 24 }, (_, i) => 0.05 * i),
    y: [
      2.5134, 2.0443, 1.6684, 1.3664, 1.1232, 0.9269, 0.7679, 0.6389, 0.5338, 0.4479, 0.3776, 0.3197, 0.272,
      0.2325, 0.1997, 0.1723, 0.1493, 0.1301, 0.1138, 0.1, 0.0883, 0.0783, 0.0698, 0.0624,
    ],
    model: (b, x) => b[0] * Math.exp(-b[1] * x) + b[2] * Math.exp(-b[3] * x) + b[4] * Math.exp(-b[5] * x),
    starts: [
      [1.2, 0.3, 5.6, 5.5, 6.5, 7.6],
      [0.5, 0.7, 3.6, 4.2, 4, 6.3],
    ],
    certified: [8.6816414977e-2, 9.5498101505e-1, 8.4400777463e-1, 2.9515951832, 1.5825685901, 4.9863565084],
    deviations: [
      1.7197908859e-2, 9.7041624475e-2, 4.1488663282e-2, 1.0766312506e-1, 5.8371576281e-2, 3.4436403035e-2,
    ],
    sumOfSquares: 1.6117193594e-8,
  },
];

describe('NIST StRD nonlinear regression, certified values to 6 digits', () => {
  for (const set of sets) {
    set.starts.forEach((start, s) => {
      it(`${set.name} from start ${s + 1}`, () => {
        const outcome = fitLeastSquares(
          {
            names: set.certified.map((_, i) => `b${i + 1}`),
            rows: set.x.length,
            evaluate: (b, out) => {
              for (let i = 0; i < out.length; i++) out[i] = set.model(b, set.x[i]) - set.y[i];
            },
          },
          start,
          { mostIterations: 2000 },
        );
        expect(outcome.kind).toBe('fitted');
        if (outcome.kind !== 'fitted') return;
        expectClose(outcome.fit.values, set.certified, { rel: 1e-6 }, 'parameters');
        expectClose(outcome.fit.standardErrors, set.deviations, { rel: 1e-6 }, 'standard deviations');
        expectClose(outcome.fit.sumOfSquares, set.sumOfSquares, { rel: 1e-6 }, 'sum of squares');
      });
    });
  }
});

describe('what a fit cannot do', () => {
  const line = (names: string[], f: (b: Float64Array, x: number) => number) => ({
    names,
    rows: 20,
    evaluate: (b: Float64Array, out: Float64Array) => {
      for (let i = 0; i < 20; i++) out[i] = f(b, i) - 3 * i - Math.sin(i);
    },
  });
  it('names parameters that act alike', () => {
    const outcome = fitLeastSquares(
      line(['slope', 'gain', 'offset'], (b, x) => (b[0] + b[1]) * x + b[2]),
      [1, 1, 0],
    );
    expect(outcome.kind).toBe('indistinct');
    if (outcome.kind === 'indistinct') expect(outcome.names).toEqual(['slope', 'gain']);
  });
  it('names a parameter the data say nothing about', () => {
    const outcome = fitLeastSquares(
      line(['slope', 'idle'], (b, x) => b[0] * x),
      [1, 1],
    );
    expect(outcome.kind).toBe('indistinct');
    if (outcome.kind === 'indistinct') expect(outcome.names).toEqual(['idle']);
  });
  it('gives up in words on too few readings and on a model with no value', () => {
    const few = fitLeastSquares({ names: ['a', 'b'], rows: 1, evaluate: (b, o) => o.fill(b[0]) }, [1, 1]);
    expect(few).toMatchObject({ kind: 'gave-up', sentence: '1 readings cannot fix 2 numbers (a, b).' });
    const none = fitLeastSquares({ names: ['a'], rows: 3, evaluate: (_, o) => o.fill(Number.NaN) }, [1]);
    expect(none.kind).toBe('gave-up');
  });
});

describe("Student's t", () => {
  it('gives the table values (any statistics text, from memory; the last is z + (z^3 + z)/4n)', () => {
    const got = [1, 2, 5, 10, 30, 1e6].map((dof) => studentQuantile(0.95, dof));
    expectClose(got, [12.7062, 4.30265, 2.57058, 2.22814, 2.04227, 1.959966], { rel: 2e-6 }, 't');
  });
});
