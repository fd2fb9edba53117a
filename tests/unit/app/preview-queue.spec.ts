import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import { createPreviewQueue, type PreviewAnswer, type PreviewRequest } from '../../../app/utils/preview-queue'

class FakeWorker {
  onmessage?: (message: { data: PreviewAnswer }) => void
  onerror?: (event: { preventDefault: () => void; message: string }) => void
  sent: PreviewRequest[] = []
  terminated = false
  postMessage(request: PreviewRequest) {
    this.sent.push(request)
  }
  terminate() {
    this.terminated = true
  }
  answer() {
    const { id } = this.sent.at(-1) ?? { id: -1 }
    this.onmessage?.({ data: { id, ok: false, message: 'answered' } })
  }
}

const input = (temperatureK: number) => ({ set: {} as never, temperatureK, waitingTimePs: 0 })
let workers: FakeWorker[]
const answers: (number | undefined)[] = []
const start = () =>
  createPreviewQueue(
    () => {
      const worker = new FakeWorker()
      workers.push(worker)
      return worker as unknown as Worker
    },
    (_, from) => answers.push(from?.temperatureK),
  )
const first = () => {
  const [worker] = workers
  if (!worker) throw new Error('no worker was started')
  return worker
}

beforeEach(() => {
  vi.useFakeTimers()
  workers = []
  answers.length = 0
})
afterEach(() => vi.useRealTimers())

describe('the queue of previews', () => {
  it('starts no worker before the first request', () => {
    start()
    expect(workers).toHaveLength(0)
  })

  it('keeps one request under way and only the latest of those that wait', () => {
    const queue = start()
    for (const temperatureK of [1, 2, 3, 4]) queue.request(input(temperatureK))
    expect(first().sent.map((each) => each.temperatureK)).toEqual([1])
    first().answer()
    expect(first().sent.map((each) => each.temperatureK)).toEqual([1, 4])
    first().answer()
    expect(answers).toEqual([1, 4])
    expect(workers).toHaveLength(1)
  })

  it('ends a computation that takes too long once a newer request waits, and only then', () => {
    const queue = start()
    queue.request(input(1))
    vi.advanceTimersByTime(60_000)
    expect(first().terminated).toBe(false)
    queue.request(input(2))
    vi.advanceTimersByTime(1)
    expect(first().terminated).toBe(true)
    expect(workers[1]?.sent.map((each) => each.temperatureK)).toEqual([2])
    workers[1]?.answer()
    expect(answers).toEqual([2])
  })

  it('survives a worker that dies: says so for its request and goes on with a fresh one', () => {
    const queue = start()
    queue.request(input(1))
    queue.request(input(2))
    first().onerror?.({ preventDefault: () => undefined, message: 'out of memory' })
    expect(answers).toEqual([1])
    expect(workers[1]?.sent.map((each) => each.temperatureK)).toEqual([2])
  })

  it('stop ends the worker and forgets what waits', () => {
    const queue = start()
    queue.request(input(1))
    queue.request(input(2))
    queue.stop()
    expect(first().terminated).toBe(true)
    vi.advanceTimersByTime(60_000)
    expect(workers).toHaveLength(1)
  })
})
