/**
 * Version of the engine's results. It enters the hash that names a stored computation, so it rises whenever a result
 * moves by more than its stated tolerance.
 */
export const ENGINE_VERSION = '1'
