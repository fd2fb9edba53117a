import type { RunEvent } from '~/types/api'

export interface RunFeedHandlers {
  onRun: (event: RunEvent) => void
  /** The stream (re)opened or a poll is due: whatever was missed has to be asked for. */
  onResync: () => void
}

const pollEveryMs = 4000

/** One event stream of a group's runs. While it is down, polls; when it is back, stops polling. */
export const openRunFeed = (groupId: string, handlers: RunFeedHandlers): { close: () => void } => {
  let timer: ReturnType<typeof setInterval> | undefined
  let closed = false
  const startPolling = () => {
    if (!closed) timer ??= setInterval(handlers.onResync, pollEveryMs)
  }
  const stopPolling = () => {
    clearInterval(timer)
    timer = undefined
  }

  let source: EventSource | undefined
  let retry: ReturnType<typeof setTimeout> | undefined
  const connect = () => {
    source = new EventSource(`/api/groups/${groupId}/events`)
    source.addEventListener('open', () => {
      stopPolling()
      handlers.onResync()
    })
    source.addEventListener('run', (message: MessageEvent<string>) =>
      handlers.onRun(JSON.parse(message.data) as RunEvent),
    )
    source.addEventListener('error', () => {
      startPolling()
      // The browser reconnects by itself, except after an answer that is no event stream.
      if (source?.readyState === EventSource.CLOSED && !closed) retry = setTimeout(connect, 4 * pollEveryMs)
    })
  }
  connect()

  return {
    close: () => {
      closed = true
      stopPolling()
      clearTimeout(retry)
      source?.close()
    },
  }
}
