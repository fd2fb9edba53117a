import { onNotice, type Notices } from '../database/notifications'
import { getDatabase } from '../database/client'
import { filterAllowed } from '../database/repositories/event-streams.repository'
import { listChangedRuns, readClock } from '../database/repositories/runs.repository'
import { withGroup } from '../database/with-group'
import { logger } from '../utils/logger'
import { AppError } from '../../shared/errors/app-error'
import { limits } from '../../shared/utils/limits'
import { toRunEvent, type RunEvent } from './run-answer'

/** Where the events of one open page go. */
export interface RunSink {
  /** `at`: moment of the change, which a page names when it comes back. */
  send: (event: RunEvent, at: number) => void
  close: () => void
}

interface Stream {
  groupId: string
  userId: string
  sessionId: string
  sink: RunSink
  /** Newest moment sent of each run, so that an older notice that arrives late changes nothing. */
  sent: Map<string, number>
  /** Moment of the database up to which this page has been told everything. */
  heardAt: number
}

const checkMs = 2500
/** Changes become visible when their transaction commits, a little after the moment that they carry. */
const overlapMs = 5000
const rememberedRuns = 5000

const streams = new Set<Stream>()
let offs: (() => void)[] = []
let checking: NodeJS.Timeout | undefined
/** Whether the pages still have to be told what was said while the line was down. */
let isOwing = false

const offer = (stream: Stream, event: RunEvent, at: number): void => {
  const before = stream.sent.get(event.id)
  if (before !== undefined && before > at) return
  stream.sent.delete(event.id)
  stream.sent.set(event.id, at)
  stream.heardAt = Math.max(stream.heardAt, at)
  if (stream.sent.size > rememberedRuns) {
    const [oldest] = stream.sent.keys()
    if (oldest !== undefined) stream.sent.delete(oldest)
  }
  stream.sink.send(event, at)
}

const onRun = ({ groupId, at, ...event }: Notices['run'][0]): void => {
  for (const stream of streams) if (stream.groupId === groupId) offer(stream, event as RunEvent, at)
}

const sendChanges = async (groupId: string, since: number | null, receivers: Iterable<Stream>): Promise<void> => {
  const from = since === null ? null : new Date(since - overlapMs)
  const { now, rows } = await withGroup(groupId, async (tx) => ({
    now: await readClock(tx),
    rows: await listChangedRuns(tx, groupId, from),
  }))
  for (const stream of receivers) {
    if (!streams.has(stream)) continue
    for (const row of rows) offer(stream, toRunEvent(row), row.changedAt.getTime())
    stream.heardAt = Math.max(stream.heardAt, now)
  }
}

/** Notices may have been missed while the line was down: every page gets what changed since it last heard anything. */
const catchUp = async (): Promise<void> => {
  const groups = new Map<string, Stream[]>()
  for (const stream of streams) groups.set(stream.groupId, [...(groups.get(stream.groupId) ?? []), stream])
  for (const [groupId, members] of groups) {
    await sendChanges(groupId, Math.min(...members.map(({ heardAt }) => heardAt)), members)
  }
}

/** Rights are looked at again while a stream is open: signing out, leaving a group or being disabled closes it. */
const check = async (): Promise<void> => {
  const open = [...streams]
  const allowed = await filterAllowed(getDatabase(), open)
  const keys = new Set(allowed.map(({ sessionId, groupId }) => `${sessionId} ${groupId}`))
  for (const stream of open) if (!keys.has(`${stream.sessionId} ${stream.groupId}`)) stream.sink.close()
}

/** The line may be back before the pool is: what could not be told is owed until it has been told. */
const settle = async (): Promise<void> => {
  if (!isOwing) return
  isOwing = false
  try {
    await catchUp()
  } catch (error) {
    isOwing = true
    throw error
  }
}

const quietly = (what: string, work: () => Promise<void>) => () => {
  work().catch((error: unknown) => logger.warn({ event: what, reason: error instanceof Error ? error.message : error }))
}

const watch = (): void => {
  if (checking) return
  const settleQuietly = quietly('stream.catch-up-failed', settle)
  const onReconnected = () => {
    isOwing = true
    settleQuietly()
  }
  offs = [onNotice('run', onRun), onNotice('reconnected', onReconnected)]
  const checkQuietly = quietly('stream.check-failed', check)
  checking = setInterval(() => {
    checkQuietly()
    settleQuietly()
  }, checkMs)
}

const unwatch = (): void => {
  if (streams.size > 0) return
  clearInterval(checking)
  checking = undefined
  isOwing = false
  for (const off of offs) off()
  offs = []
}

/**
 * Sends the runs of a group to one page: first those that changed since `since` (or those that go on, for a page that
 * comes for the first time), then every change. Returns what ends it.
 */
export const openRunStream = async (
  input: { groupId: string; userId: string; sessionId: string; since: number | null },
  open: () => RunSink,
): Promise<() => void> => {
  const { since, ...owner } = input
  const own = [...streams].filter((stream) => stream.userId === owner.userId)
  if (own.length >= limits.eventStreamsPerUser) {
    throw new AppError('quota/exceeded', {
      detail: `One person may keep ${limits.eventStreamsPerUser} event streams open; close another page first.`,
    })
  }
  const stream: Stream = { ...owner, sink: open(), sent: new Map(), heardAt: since ?? 0 }
  const end = () => {
    streams.delete(stream)
    unwatch()
  }
  // Listening starts before the state is read, so that nothing can happen unheard in between.
  streams.add(stream)
  watch()
  try {
    await sendChanges(owner.groupId, since, [stream])
  } catch (error) {
    end()
    throw error
  }
  return end
}

export const closeRunStreams = (): void => {
  for (const stream of streams) stream.sink.close()
}
