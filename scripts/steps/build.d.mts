/** Builds the application when its sources changed; true when it built. */
export declare const ensureBuilt: () => Promise<boolean>
/** SHA-256 over everything the build reads. */
export declare const hashInputs: () => string
