import { describe, expect, it } from 'vitest';
import { createLogReader, type LogOptions, type LogOutcome } from '../../../src/core/bench/logs/logReader';

const read = (input: string | Uint8Array, options?: LogOptions): LogOutcome => {
  const reader = createLogReader(options);
  reader.push(input);
  return reader.finish();
};
const bytes = (...values: number[]): Uint8Array => Uint8Array.from(values);
const utf16 = (text: string, isBig: boolean, hasMark: boolean): Uint8Array => {
  const out: number[] = hasMark ? (isBig ? [0xfe, 0xff] : [0xff, 0xfe]) : [];
  for (let i = 0; i < text.length; i++) {
    const c = text.charCodeAt(i);
    out.push(...(isBig ? [c >> 8, c & 255] : [c & 255, c >> 8]));
  }
  return Uint8Array.from(out);
};
const good = 't,roll\n0,1.5\n0.01,2.5\n0.02,3.5\n';
const manyGood = `t,roll\n${Array.from({ length: 3000 }, (_, i) => `${i / 100},${i % 7}.25`).join('\n')}\n`;
const withTail = (tail: Uint8Array): Uint8Array => {
  const head = Uint8Array.from(manyGood, (c) => c.charCodeAt(0));
  const out = new Uint8Array(head.length + tail.length);
  out.set(head);
  out.set(tail, head.length);
  return out;
};

/** Refused: the whole log cannot be used, and one sentence says why and where. */
const refused: readonly (readonly [string, string | Uint8Array, RegExp, LogOptions?])[] = [
  ['no bytes', '', /empty: the file has no bytes/],
  ['only blanks', '   \n \n\n', /empty: it holds no line/],
  ['only a byte-order mark', bytes(0xef, 0xbb, 0xbf), /empty/],
  ['only line ends', '\r\n\r\n\n', /empty/],
  ['header only', 't,roll,pitch\n', /header and no rows: line 1 reads "t,roll,pitch"/],
  ['header only, no line end', 't,roll,pitch', /header and no rows: line 1/],
  ['prose', 'Dear all,\nthe log will follow\nsoon.\n', /no row of numbers: line 1 starts with "Dear all/],
  ['UTF-16 little endian with mark', utf16(good, false, true), /UTF-16/],
  ['UTF-16 big endian with mark', utf16(good, true, true), /UTF-16/],
  ['UTF-16 little endian, no mark', utf16(good, false, false), /UTF-16 with no byte-order mark/],
  ['UTF-16 big endian, no mark', utf16(good, true, false), /UTF-16 with no byte-order mark/],
  ['spreadsheet', bytes(0x50, 0x4b, 3, 4, 20, 0, 6), /spreadsheet.*line 1 starts with "PK"/],
  ['old spreadsheet', bytes(0xd0, 0xcf, 0x11, 0xe0, 0xa1), /old spreadsheet/],
  ['gzip', bytes(0x1f, 0x8b, 8, 0), /gzip/],
  ['PDF', '%PDF-1.7\n1 0 obj', /PDF/],
  [
    'random bytes',
    Uint8Array.from({ length: 4000 }, (_, i) => (i * 167 + 13 * (i >> 3)) & 255),
    /binary file.*line \d+ has the byte/,
  ],
  ['all zero bytes', new Uint8Array(5000), /binary|UTF-16/],
  ['unclosed quote', 't,roll\n0,1\n1,"2\n2,3\n', /Line 3 opens a quote .* never closed/],
  [
    'one line without end',
    `t,roll\n0,1\n${'7'.repeat(5000)}`,
    /Line 3 is longer than 1000 bytes/,
    { longestLine: 1000 },
  ],
  [
    'one huge quoted cell',
    `t,roll\n0,1\n1,"${'x\n'.repeat(1_300_000)}`,
    /Line 3 is longer than .*opens a quote/,
  ],
  ['too many columns', `a,b\n1,2\n3,4\n${'1,'.repeat(3000)}1\n`, /Line 4 has 3001 columns; at most 1024/],
  ['every cell a word', 't,roll\nmon,tue\nwed,thu\nfri,sat\n', /no row of numbers: line 1/],
  ['a wanted column is absent', good, /no column "yaw": it has t, roll/, { keep: ['t', 'yaw'] }],
  [
    'most lines of another width',
    `t,roll\n${'1,2\n'.repeat(210)}${'1,2,3,4\n'.repeat(5000)}`,
    /Most lines do not have the 2 cells.*Line 212 has 4 cells where 2/,
  ],
];

/** Read with a remark: what could be used was, and the sentence names line, column and value. */
const remarked: readonly (readonly [string, string | Uint8Array, RegExp, number, LogOptions?])[] = [
  ['one column', 'roll\n1\n2\n3\n', /one column, "roll".*no time stamps/, 3],
  ['no header', '0,1\n1,2\n2,3\n', /no header/, 3],
  ['1e308', 't,roll\n0,1\n1,1e308\n2,3\n', /Line 3, column "roll": "1e308" is too large/, 3],
  ['1e309', 't,roll\n0,1\n1,-1e309\n2,3\n', /Line 3, column "roll": "-1e309" is too large/, 3],
  ['infinity', 't,roll\n0,1\n1,inf\n2,3\n', /Line 3, column "roll": "inf" is too large/, 3],
  [
    'a word in a number column',
    't,roll\n0,1\n1,oops\n2,3\n',
    /Line 3, column "roll": "oops" is no number/,
    3,
  ],
  ['a number with a unit', 't,roll\n0,1\n1,2.5deg\n2,3\n', /Line 3, column "roll": "2.5deg" is no number/, 3],
  ['two decimal points', 't,roll\n0,1\n1,2.5.1\n2,3\n', /Line 3, column "roll": "2.5.1" is no number/, 3],
  ['hexadecimal', 't,roll\n0,1\n1,0x1F\n2,3\n', /Line 3, column "roll": "0x1F" is no number/, 3],
  [
    'thousands point with a decimal comma',
    't;roll\n0;1,5\n1;1.234,5\n2;3,5\n',
    /Line 3, column "roll": "1.234,5" is no number/,
    3,
  ],
  [
    'control characters in a cell',
    `${good}0.03,\u0001\u00024\n`,
    /Line 5, column "roll": "\\x01\\x024" is no number/,
    4,
  ],
  ['a missing cell', 't,roll\n0,1\n1,\n2,3\n', /Column "roll" has 1 cell missing of 3/, 3],
  ['NaN', 't,roll\n0,1\n1,NaN\n2,nan\n', /Column "roll" has 2 cells missing of 3/, 3],
  [
    'a short line',
    't,roll,pitch\n0,1,2\n1,2\n2,3,4\n',
    /Line 3 has 2 cells where 3 are expected, from column "pitch"/,
    3,
  ],
  ['a long line', 't,roll\n0,1\n1,2,9\n2,3\n', /Line 3 has 3 cells where 2 are expected/, 3],
  [
    'last line cut',
    't,roll,pitch\n0,1,2\n1,2,3\n2,3',
    /Line 4, the last, is cut short before column "pitch"/,
    2,
  ],
  ['the header again', 't,roll\n0,1\n1,2\nt,roll\n0,1\n', /header comes again at line 4/, 3],
  [
    'a text column',
    't,state,roll\n0,idle,1\n1,run,2\n2,run,3\n',
    /Column "state" is left out.*Line 2, column "state": "idle"/,
    3,
  ],
  [
    'lines above the header',
    'Logger 3\nrun,5\nt,roll,pitch\n0,1,2\n1,2,3\n',
    /2 lines above the header left out/,
    2,
  ],
  ['comments between rows', 't,roll\n0,1\n# bump\n1,2\n', /1 comment line left out/, 2],
  [
    'zero bytes after power loss',
    withTail(new Uint8Array(300_000)),
    /From line 3002 on the file holds zero bytes/,
    3000,
  ],
  [
    'a stray Latin-1 byte',
    withTail(bytes(0x31, 0x2c, 0xb0, 0x0a)),
    /Line 3002, column "roll": "\uFFFD" is no number/,
    3001,
  ],
];

/** Odd but sound: nothing is lost. */
const sound: readonly (readonly [string, string | Uint8Array, readonly number[]])[] = [
  ['byte-order mark', `\uFEFF${good}`, [1.5, 2.5, 3.5]],
  ['Windows line ends', good.replaceAll('\n', '\r\n'), [1.5, 2.5, 3.5]],
  ['old line ends', good.replaceAll('\n', '\r'), [1.5, 2.5, 3.5]],
  ['mixed line ends', 't,roll\r0,1.5\r\n0.01,2.5\n0.02,3.5', [1.5, 2.5, 3.5]],
  ['quoted cells', '"t","roll"\n"0","1.5"\n"0.01","2.5"\n"0.02","3.5"\n', [1.5, 2.5, 3.5]],
  ['blank lines between', 't,roll\n\n0,1.5\n\n0.01,2.5\n0.02,3.5\n\n', [1.5, 2.5, 3.5]],
  ['decimal comma and semicolon', 't;roll\n0;1,5\n0,01;2,5\n0,02;3,5\n', [1.5, 2.5, 3.5]],
  ['decimal comma and tab', 't\troll\n0\t1,5\n0,01\t2,5\n0,02\t3,5\n', [1.5, 2.5, 3.5]],
  ['runs of blanks', '   t    roll\n 0.00   1.5\n 0.01   2.5  \n 0.02   3.5\n', [1.5, 2.5, 3.5]],
  ['bars', 't|roll\n0|1.5\n0.01|2.5\n0.02|3.5\n', [1.5, 2.5, 3.5]],
  ['blanks after commas', 't, roll\n0, 1.5\n0.01, 2.5\n0.02, 3.5\n', [1.5, 2.5, 3.5]],
  ['units in the header', 't [s],roll (deg)\n0,1.5\n0.01,2.5\n0.02,3.5\n', [1.5, 2.5, 3.5]],
  ['units in a second line', 't,roll\ns,deg\n0,1.5\n0.01,2.5\n0.02,3.5\n', [1.5, 2.5, 3.5]],
  ['a header behind a hash', '# t, roll\n0,1.5\n0.01,2.5\n0.02,3.5\n', [1.5, 2.5, 3.5]],
  ['exponents', 't,roll\n0,15e-1\n1e-2,+2.5E0\n.02,3500e-3\n', [1.5, 2.5, 3.5]],
  ['a quoted cell with line end', 't,roll,note\n0,1.5,"a\nb"\n0.01,2.5,c\n0.02,3.5,d\n', [1.5, 2.5, 3.5]],
];

describe('malformed logs', () => {
  it('has a corpus of at least forty', () => {
    expect(refused.length + remarked.length).toBeGreaterThanOrEqual(40);
  });
  for (const [name, input, pattern, options] of refused) {
    it(`${name}: refused in words`, () => {
      const outcome = read(input, options);
      expect(outcome.kind).toBe('refused');
      if (outcome.kind === 'refused') expect(outcome.sentence).toMatch(pattern);
    });
  }
  for (const [name, input, pattern, rows, options] of remarked) {
    it(`${name}: read, with a remark`, () => {
      const outcome = read(input, options);
      expect(outcome.kind).toBe('read');
      if (outcome.kind !== 'read') return;
      expect(outcome.table.rows).toBe(rows);
      expect(outcome.remarks.join('\n')).toMatch(pattern);
    });
  }
  for (const [name, input, roll] of sound) {
    it(`${name}: read whole, whatever the size of the pieces`, () => {
      const whole = typeof input === 'string' ? new TextEncoder().encode(input) : input;
      for (const piece of [1, 3, 7, whole.length]) {
        const reader = createLogReader();
        for (let i = 0; i < whole.length; i += piece) reader.push(whole.subarray(i, i + piece));
        const outcome = reader.finish();
        expect(outcome.kind).toBe('read');
        if (outcome.kind !== 'read') return;
        const column = outcome.table.names.indexOf('roll');
        expect(column).toBe(1);
        expect([...outcome.table.columns[0]]).toEqual([0, 0.01, 0.02]);
        expect([...outcome.table.columns[1]]).toEqual(roll);
      }
    });
  }
});
