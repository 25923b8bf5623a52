const BLOCK = 65_536;

/**
 * Columns that grow row by row. Rows go into fixed blocks rather than into arrays that double, so reading never
 * holds more than what was read plus one block a column, and joining holds one column twice at the worst.
 */
export interface ColumnStore {
  readonly width: number;
  readonly rows: number;
  /** Appends one row; `row` may be longer than the width. */
  append(row: Float64Array): void;
  /** Joins the blocks into one array a column and empties the store. */
  take(): Float64Array[];
  /** Copies rows [from, to) of one column without joining. */
  slice(column: number, from: number, to: number): Float64Array;
}

export function createColumnStore(width: number): ColumnStore {
  let blocks: Float64Array[][] = Array.from({ length: width }, () => []);
  let rows = 0;
  return {
    width,
    get rows() {
      return rows;
    },
    append(row) {
      const at = rows % BLOCK;
      const block = (rows - at) / BLOCK;
      for (let c = 0; c < width; c++) {
        if (at === 0) blocks[c].push(new Float64Array(BLOCK));
        blocks[c][block][at] = row[c];
      }
      rows++;
    },
    take() {
      const joined = blocks.map((column, c) => {
        const out = new Float64Array(rows);
        for (let b = 0; b < column.length; b++) {
          const left = rows - b * BLOCK;
          out.set(left < BLOCK ? column[b].subarray(0, left) : column[b], b * BLOCK);
        }
        blocks[c] = [];
        return out;
      });
      blocks = Array.from({ length: width }, () => []);
      rows = 0;
      return joined;
    },
    slice(column, from, to) {
      const first = Math.max(0, from);
      const last = Math.min(rows, to);
      const out = new Float64Array(Math.max(0, last - first));
      for (let i = 0; i < out.length; i++) {
        const at = (first + i) % BLOCK;
        out[i] = blocks[column][(first + i - at) / BLOCK][at];
      }
      return out;
    },
  };
}
