/** Wrong input of the command line: every place that is wrong, one line each. */
export class InputProblem extends Error {
  constructor(readonly problems: readonly { path: string; message: string }[]) {
    super(problems.map(({ path, message }) => `${path}: ${message}`).join('\n'))
  }
}
