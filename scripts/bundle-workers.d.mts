export declare const bundleWorkers: (options: { root: string; outdir: string }) => Promise<void>
