import fc from 'fast-check'

/**
 * Property tests draw the same examples in every run, so that a change is judged by what it changed. A nightly run draws
 * new ones with `PROPERTY_SEED=random`; a failure prints its seed, which `PROPERTY_SEED=N` repeats.
 */
const wanted = process.env.PROPERTY_SEED
if (wanted !== 'random') fc.configureGlobal({ seed: wanted === undefined ? 20_260_101 : Number(wanted) })
