/**
 * A reason to stop that the reader can act on. The scripts print its message as it stands, without a stack
 * trace, and leave with its exit code; any other error is a bug and shows its stack.
 */
export class PlainStop extends Error {
  /** @param {string} message what happened, what was kept, what to do @param {number} [exitCode] */
  constructor(message, exitCode = 1) {
    super(message);
    this.name = 'PlainStop';
    this.exitCode = exitCode;
  }
}

/** The sentence for a disk that is full, wherever it was noticed. @param {string} folder */
export function diskFullSentence(folder) {
  return (
    `The disk that holds ${folder} is full. What was stored before is kept. ` +
    'Make room on that disk, then run the command again.'
  );
}

/**
 * Turns an error of any kind into what is printed: the sentence of a PlainStop, the sentence for a full disk, or
 * the stack of a bug.
 * @param {unknown} error @param {string} folder where the scripts write
 * @returns {{ text: string, exitCode: number }}
 */
export function describeFailure(error, folder) {
  if (error instanceof PlainStop) return { text: error.message, exitCode: error.exitCode };
  const code = /** @type {NodeJS.ErrnoException} */ (error)?.code;
  if (code === 'ENOSPC') return { text: diskFullSentence(folder), exitCode: 1 };
  if (code === 'EACCES' || code === 'EPERM' || code === 'EROFS') {
    const path = /** @type {NodeJS.ErrnoException} */ (error).path ?? folder;
    return {
      text: `${path} cannot be written by this account. Nothing was changed there. Give this account the right to write it, or run the command as its owner.`,
      exitCode: 1
    };
  }
  return { text: error instanceof Error ? (error.stack ?? error.message) : String(error), exitCode: 1 };
}
