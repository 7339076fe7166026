/** The signed-in person as the shells show them. */
export interface Person {
  readonly printedName: string;
  readonly userName: string;
  /** Names of the roles, as people read them. */
  readonly roles: readonly string[];
}
