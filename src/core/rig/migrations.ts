type Json = Record<string, unknown>;

/**
 * `MIGRATIONS[n]` turns a document of version n into one of version n + 1. A document is carried up one
 * version at a time and only then validated, so each step need know only its own two versions.
 */
const MIGRATIONS: Readonly<Record<number, (document: Json) => Json>> = {};

/** Carries a document from `version` up to the newest, leaving the original untouched. */
export function migrate(document: Json, version: number): Json {
  let current = document;
  for (let at = version; MIGRATIONS[at] !== undefined; at++) {
    current = { ...(MIGRATIONS[at] as (document: Json) => Json)(current), version: at + 1 };
  }
  return current;
}
