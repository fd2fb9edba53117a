import type { Demo } from '../demo/load-demo'

/** Loads the invented demo into a migrated database, once. */
export declare const loadDemo: (env: Record<string, string>) => Promise<Demo>
export declare const printDemo: (demo: Demo) => void
