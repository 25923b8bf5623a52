import type { GainList } from './controlNumbers';
import { plainNumber } from './text';

/**
 * The gains as CSV text: law, gain, value, unit, one gain a line; the header alone where there are none.
 *
 * Source: RFC 4180 for the form. Names and units hold nothing that would need quotes.
 */
export function writeGainsCsv(list: GainList): string {
  const lines = ['law,gain,value,unit (SI)'];
  if (list.kind === 'gains') {
    for (const { name, value, unit } of list.gains)
      lines.push([list.law, name, plainNumber(value), unit].join(','));
  }
  return `${lines.join('\r\n')}\r\n`;
}
