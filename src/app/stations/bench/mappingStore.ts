/** Which column was what: remembered in this browser, so that a logger's files are mapped once. */
import { type DBSchema, openDB } from 'idb';
import { type ColumnMapping, LOG_QUANTITIES, mappingKey, TIME_UNITS } from '../../../core/bench';
import { findUnit } from '../../../core/units';

interface Kept extends DBSchema {
  mappings: { key: string; value: ColumnMapping };
}

const database = () =>
  openDB<Kept>('tiltwright-bench', 1, { upgrade: (db) => void db.createObjectStore('mappings') });

/** What was kept may be older than this program: a mapping with a word it does not know is left alone. */
const isUsable = (mapping: ColumnMapping): boolean =>
  mapping.timeUnit in TIME_UNITS &&
  mapping.columns.every(
    ({ quantity, unit }) =>
      quantity in LOG_QUANTITIES && findUnit(LOG_QUANTITIES[quantity], unit) !== undefined,
  );

/** The mapping of the last log with the same columns; undefined when there was none or nothing is kept here. */
export async function recallMapping(names: readonly string[]): Promise<ColumnMapping | undefined> {
  try {
    const db = await database();
    const kept = await db.get('mappings', mappingKey(names));
    db.close();
    return kept && isUsable(kept) ? kept : undefined;
  } catch {
    return undefined;
  }
}

/** Keeps a mapping; without storage it lasts as long as the page. */
export async function rememberMapping(names: readonly string[], mapping: ColumnMapping): Promise<void> {
  try {
    const db = await database();
    await db.put('mappings', mapping, mappingKey(names));
    db.close();
  } catch {
    // The log in hand is mapped all the same.
  }
}
