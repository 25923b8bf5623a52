/** One measured figure. `target` says in words what was asked of it; `ok` whether this run met it. */
export interface Row {
  readonly name: string;
  readonly value: number;
  readonly unit: string;
  readonly target?: string;
  readonly ok?: boolean;
}
