/** Limits that the form, the server and the worker all keep. One place, so that a message can always name the number. */
export const limits = {
  /** Time samples of a linear spectrum. */
  linearSamples: 2 ** 20,
  /** Time samples along one side of a two-dimensional map. */
  mapSamples: 4096,
  /** Maps of one run: temperatures times waiting times. */
  mapsPerRun: 256,
  temperatures: 64,
  waitingTimes: 256,
  modes: 64,
  bathTerms: 16,
  /** Points of one tabulated spectral density. */
  tablePoints: 2000,
  /** Characters of one typed spectral density. */
  formulaLength: 500,
  /** Runs that one group may have waiting at a time. */
  queuedRunsPerGroup: 20_000,
  /** Runs of one answer, newest first. */
  listedRuns: 500,
  /** Bytes of all arrays of one run. */
  runBytes: 512 * 1024 * 1024,
  /** Attempts of one run that may lose their worker. */
  runLosses: 3,
  /** Event streams that one person may hold open at a time. */
  eventStreamsPerUser: 6,
  /** Bytes of one uploaded measurement file. */
  uploadBytes: 64 * 1024 * 1024,
  /** Files of one group, and their bytes together. */
  groupFiles: 5000,
  groupFileBytes: 8 * 1024 ** 3,
  /** Uploads that one account may have running at once in one server process. */
  uploadsAtOnce: 8,
  /** Points of one stored measurement, and columns of its file. */
  measurementPoints: 200_000,
  tableColumns: 1000,
  /** Bytes of an ordinary JSON body. */
  jsonBytes: 1024 * 1024,
  nameLength: 200,
  noteLength: 4000,
  passwordMin: 15,
  passwordMax: 256,
} as const
