import { getRequestHeader } from 'h3'
import { openRunStream } from '../../../services/run-streams.service'
import { defineGroupRoute } from '../../../utils/define-route'
import { openEventStream, type EventStream } from '../../../utils/event-stream'

/** The id of our events is a moment in milliseconds; anything else that a client sends starts from the present state. */
const readMoment = (text: string | undefined): number | null => (text && /^\d{12,15}$/.test(text) ? Number(text) : null)

export default defineGroupRoute({
  access: 'viewer',
  handler: async ({ event, groupId, user, sessionId }) => {
    let stream: EventStream | undefined
    const since = readMoment(getRequestHeader(event, 'last-event-id'))
    const end = await openRunStream({ groupId, userId: user.id, sessionId, since }, () => {
      const opened = (stream = openEventStream(event))
      return {
        send: (run, at) => opened.send(run.id, { id: at, event: 'run', data: run }),
        close: opened.close,
      }
    })
    await stream?.closed
    end()
  },
})
