/** What one request is answered with: the values and, where there is something to say, how they were reached. */
export interface Answer {
  values: Record<string, unknown>
  diagnostics?: Record<string, unknown>
}

/** A request that is well formed and that the engine cannot answer, with the place that stands in the way. */
export class EngineRefusal extends Error {
  constructor(
    readonly path: string,
    message: string,
  ) {
    super(message)
  }
}
