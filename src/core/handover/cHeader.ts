/** Schedule and gains as one C99 header that a firmware build can take as it is. */
import { crc32 } from './checksum';
import { type GainList, LAW_SENTENCES, type ScheduleList } from './controlNumbers';
import type { Imprint } from './handoverJson';
import { identifierFor, makeUnique } from './text';

/** Units as they stand in names: `rad/s` is `rad_s`, a gain of `1/s^2` is `per_s2`. */
const UNIT_NAMES: Readonly<Record<string, string>> = {
  'rad/rad': 'rad_rad',
  'rad/(rad s)': 'per_s',
  'rad s/rad': 's',
  '1/s': 'per_s',
  '1/s^2': 'per_s2',
  ratio: 'ratio',
  'N m/rad': 'Nm_rad',
  'N m s/rad': 'Nms_rad',
};

/** A text that cannot end its comment, open another or join lines; trigraphs and what is not ASCII are broken up. */
const commented = (text: string): string =>
  text
    .replace(/[^ -~]/g, '?')
    .replace(/\?{2,}/g, '?')
    .replace(/\*\//g, '* /')
    .replace(/\/\*/g, '/ *')
    .replace(/\\/g, '/');

/** A float constant that reads back as the same float: nine digits are enough for any. */
function floatText(value: number): string {
  const text = String(Number(Math.fround(value).toPrecision(9)));
  return `${/[.e]/.test(text) ? text : `${text}.0`}f`;
}

function arrayText(values: ArrayLike<number>, indent: string): string {
  const lines: string[] = [];
  for (let i = 0; i < values.length; i += 8) {
    const row = Array.from(values).slice(i, i + 8);
    lines.push(indent + row.map(floatText).join(', '));
  }
  return lines.join(',\n');
}

/** Bytes of floats as the compiler will read them (no minus zero), least significant first, in the order given. */
function floatBytes(columns: readonly ArrayLike<number>[]): Uint8Array {
  const bytes = new Uint8Array(4 * columns.reduce((sum, column) => sum + column.length, 0));
  const view = new DataView(bytes.buffer);
  let at = 0;
  for (const column of columns) {
    for (let i = 0; i < column.length; i++, at += 4) view.setFloat32(at, column[i]! + 0, true);
  }
  return bytes;
}

function checkText(
  name: string,
  arrays: readonly { readonly array: string; readonly floats: string }[],
): string {
  const calls = arrays.map(({ array, floats }) => `    crc = ${name}_crc(crc, ${array}, ${floats});`);
  return `/* CRC-32 (ISO 3309) of floats as IEEE 754 single precision, least significant byte first. */
static inline uint32_t ${name}_crc(uint32_t crc, const float *values, unsigned long count)
{
    unsigned long i;
    int k;
    for (i = 0; i < count; i++) {
        uint32_t bits;
        memcpy(&bits, &values[i], sizeof bits);
        for (k = 0; k < 32; k++) {
            uint32_t low = (crc ^ (bits >> k)) & 1u;
            crc = (crc >> 1) ^ (low ? 0xEDB88320u : 0u);
        }
    }
    return crc;
}

/* 1 when the numbers in this file are those that were handed over, 0 when one has changed. */
static inline int ${name}_is_whole(void)
{
    uint32_t crc = 0xFFFFFFFFu;
${calls.join('\n')}
    return (crc ^ 0xFFFFFFFFu) == ${name.toUpperCase()}_CRC32;
}`;
}

interface Part {
  /** Names of the arrays and how many floats each has, in the order of the checksum. */
  readonly arrays: readonly { readonly array: string; readonly floats: string }[];
  readonly columns: readonly ArrayLike<number>[];
  readonly lines: readonly string[];
}

function schedulePart(name: string, schedule: ScheduleList): Part {
  if (schedule.kind === 'none')
    return { arrays: [], columns: [], lines: [`/* No schedule: ${commented(schedule.sentence)} */`] };
  const big = name.toUpperCase();
  const { time, gimbals, isCyclic } = schedule;
  const gyroNames = makeUnique(gimbals.map((gimbal, i) => identifierFor(gimbal.name, `gyro_${i + 1}`)));
  const table = (pick: 'tilt' | 'tiltRate', array: string, unit: string): string =>
    `static const float ${array}[${big}_GIMBALS][${big}_INSTANTS] = { /* ${unit} */\n${gimbals
      .map((gimbal) => `    { /* ${commented(gimbal.name)} */\n${arrayText(gimbal[pick], '        ')} }`)
      .join(',\n')}\n};`;
  const columns = [time, ...gimbals.map(({ tilt }) => tilt), ...gimbals.map(({ tiltRate }) => tiltRate)];
  const hasGimbals = gimbals.length > 0;
  return {
    columns,
    arrays: [
      { array: `${name}_time_s`, floats: `${big}_INSTANTS` },
      ...(hasGimbals
        ? [
            { array: `&${name}_tilt_rad[0][0]`, floats: `${big}_GIMBALS * ${big}_INSTANTS` },
            { array: `&${name}_tilt_rate_rad_s[0][0]`, floats: `${big}_GIMBALS * ${big}_INSTANTS` },
          ]
        : []),
    ],
    lines: [
      `#define ${big}_INSTANTS ${time.length}u`,
      `#define ${big}_GIMBALS ${gimbals.length}u`,
      `#define ${big}_IS_CYCLIC ${isCyclic ? 1 : 0} /* 1: the last instant leads back to the first */`,
      ...gyroNames.map((gyro, i) => `#define ${big}_GIMBAL_${gyro.toUpperCase()} ${i}`),
      '',
      `static const float ${name}_time_s[${big}_INSTANTS] = {\n${arrayText(time, '    ')}\n};`,
      ...(hasGimbals
        ? [
            '',
            table('tilt', `${name}_tilt_rad`, 'rad'),
            '',
            table('tiltRate', `${name}_tilt_rate_rad_s`, 'rad/s'),
          ]
        : []),
    ],
  };
}

function gainPart(name: string, list: GainList): Part {
  if (list.kind === 'none')
    return { arrays: [], columns: [], lines: [`/* No gains: ${commented(list.sentence)} */`] };
  const big = name.toUpperCase();
  const places = list.gains.map(({ name: gain, unit }, i) => {
    const word = gain.replace(/[A-Z]/g, (letter) => `_${letter}`).toUpperCase();
    return `#define ${big}_GAIN_${word}_${UNIT_NAMES[unit] ?? identifierFor(unit, 'unit')} ${i}u`;
  });
  return {
    columns: [list.gains.map(({ value }) => value)],
    arrays: [{ array: `${name}_gains`, floats: `${big}_GAINS` }],
    lines: [
      `/* ${commented(LAW_SENTENCES[list.law])} */`,
      `#define ${big}_GAINS ${list.gains.length}u`,
      ...places,
      `static const float ${name}_gains[${big}_GAINS] = {\n${arrayText(
        list.gains.map(({ value }) => value),
        '    ',
      )}\n};`,
    ],
  };
}

/**
 * The schedule and gains as a C99 header: fixed arrays of float, units in the names, and a checksum with the
 * function that checks it.
 *
 * @param rigName   of which the names in the header are made
 * @param rigHash   SHA-256 of the rig, named in the head
 *
 * Compiles without a warning under -std=c99 -Wall -Wextra. What is missing is said in a comment. O(numbers).
 */
export function writeCHeader(
  rigName: string,
  rigHash: string,
  schedule: ScheduleList,
  gains: GainList,
  imprint: Imprint,
): string {
  const name = identifierFor(rigName, 'rig');
  const guard = `${name.toUpperCase()}_CONTROL_H`;
  const parts = [schedulePart(name, schedule), gainPart(name, gains)];
  const arrays = parts.flatMap((part) => part.arrays);
  const crc = crc32(floatBytes(parts.flatMap((part) => part.columns)));
  const hasNumbers = arrays.length > 0;
  return [
    `/* ${commented(rigName)}: tilt schedule and gains.`,
    `   Written by ${commented(imprint.program)}, ${commented(imprint.date)}.`,
    `   Rig SHA-256 ${rigHash}.`,
    '   Body frame: x forward, y left, z up. Tilt is right-handed about each gimbal axis. */',
    `#ifndef ${guard}`,
    `#define ${guard}`,
    '',
    '#include <stdint.h>',
    '#include <string.h>',
    '',
    ...parts.flatMap(({ lines }) => [...lines, '']),
    ...(hasNumbers
      ? [
          `#define ${name.toUpperCase()}_CRC32 0x${crc.toString(16).toUpperCase().padStart(8, '0')}u`,
          '',
          checkText(name, arrays),
          '',
        ]
      : []),
    '#endif',
    '',
  ].join('\n');
}
