/** One step of a recipe as a method stores it. */
export interface StepSpec {
  readonly name: string;
  readonly version: number;
  readonly options: Readonly<Record<string, unknown>>;
}
