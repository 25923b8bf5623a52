/** Order of a list with one item moved to another place; the list itself where the places are not in it. */
export function movePart<T>(list: readonly T[], from: number, to: number): readonly T[] {
  if (from === to || from < 0 || to < 0 || from >= list.length || to >= list.length) return list;
  const next = list.filter((_, index) => index !== from);
  next.splice(to, 0, list[from] as T);
  return next;
}

export const dropAt = <T>(list: readonly T[], at: number): readonly T[] =>
  list.filter((_, index) => index !== at);
