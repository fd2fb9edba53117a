export declare const ensureKernel: () => Promise<void>
