import { performance } from 'node:perf_hooks'

/** Writes progress a few times a second at most, one write at a time, always the newest value. */
export class ProgressWriter {
  readonly #startedAt = performance.now()
  readonly #write: (progress: number, secondsLeft: number | null) => Promise<void>
  readonly #intervalMs: number
  #latest = 0
  #written = 0
  #timer: NodeJS.Timeout | undefined
  #writing: Promise<void> = Promise.resolve()
  #closed = false

  constructor(write: (progress: number, secondsLeft: number | null) => Promise<void>, intervalMs = 400) {
    this.#write = write
    this.#intervalMs = intervalMs
  }

  report(fraction: number): void {
    if (this.#closed || !(fraction > this.#latest)) return
    this.#latest = Math.min(fraction, 1)
    this.#timer ??= setTimeout(() => this.#flush(), this.#intervalMs)
  }

  /** Waits for a write that is under way; writes no more. */
  async close(): Promise<void> {
    this.#closed = true
    clearTimeout(this.#timer)
    await this.#writing
  }

  #flush(): void {
    const progress = this.#latest
    this.#writing = this.#write(progress, this.#secondsLeft(progress)).finally(() => {
      this.#written = progress
      this.#timer = undefined
      if (!this.#closed && this.#latest > this.#written) {
        this.#timer = setTimeout(() => this.#flush(), this.#intervalMs)
      }
    })
  }

  /** The work so far says how long the rest takes; the first moments say nothing. */
  #secondsLeft(progress: number): number | null {
    const seconds = (performance.now() - this.#startedAt) / 1000
    if (progress < 0.02 || seconds < 0.2) return null
    return Math.round((10 * seconds * (1 - progress)) / progress) / 10
  }
}
