/** What stands behind a number: the formula as it would be written on paper, and where it comes from. */
export interface FormulaNote {
  readonly formula: string;
  readonly source: string;
}

export type FormulaNotes<Name extends string> = Readonly<Record<Name, FormulaNote>>;
