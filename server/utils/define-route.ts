import type { EventHandlerRequest, H3Event } from 'h3'
import { defineEventHandler, getQuery, getRouterParams } from 'h3'
import { z } from 'zod'
import { AppError, type Issue } from '../../shared/errors/app-error'
import type { Role } from '../../shared/schemas/roles'
import { limits } from '../../shared/utils/limits'
import { findSignedIn, requireMembership, type SignedIn } from '../services/access.service'
import { sendAnswer } from './answer'
import { findUnstorableText, hasBody, parseBody, readLimited, requireMediaType } from './read-body'
import { requestIdOf } from './request-context'
import { readSessionToken } from './session-cookie'

type Schema = z.ZodType
type Output<S> = S extends z.ZodType ? z.output<S> : undefined

interface Shape<P extends Schema | undefined, Q extends Schema | undefined, B extends Schema | 'stream' | undefined> {
  /** Path parameters beside groupId. Anything that does not fit is a thing that does not exist: 404. */
  params?: P
  query?: Q
  /** JSON body; `stream` leaves the body unread for a handler that counts it itself. */
  body?: B
  /** Keys of the body that are never stored as text (passwords). */
  unstoredKeys?: readonly string[]
  status?: number
}

interface Input<P, Q, B> {
  event: H3Event<EventHandlerRequest>
  requestId: string
  params: Output<P>
  query: Output<Q>
  body: Output<B>
}

const toIssues = (error: z.ZodError): Issue[] =>
  error.issues.flatMap((issue) => {
    const path = issue.path.map((step) => (typeof step === 'symbol' ? String(step) : step))
    if (issue.code !== 'unrecognized_keys') return [{ path, message: issue.message }]
    // One place a key, so that each can be pointed at.
    return issue.keys.map((key) => ({ path: [...path, key], message: `expected no key of this name; found "${key}"` }))
  })

const parseInput = <S extends Schema>(schema: S, value: unknown): z.output<S> => {
  const parsed = schema.safeParse(value)
  if (parsed.success) return parsed.data
  throw new AppError('input/invalid', { issues: toIssues(parsed.error) })
}

const parseParams = <S extends Schema>(
  schema: S | undefined,
  values: Record<string, string>,
): z.output<S> | undefined => {
  if (!schema) return undefined
  const parsed = schema.safeParse(values)
  if (!parsed.success) throw new AppError('request/not-found')
  return parsed.data
}

const readInput = async <
  P extends Schema | undefined,
  Q extends Schema | undefined,
  B extends Schema | 'stream' | undefined,
>(
  event: H3Event,
  shape: Shape<P, Q, B>,
  pathParams: Record<string, string>,
): Promise<Input<P, Q, B>> => {
  const params = parseParams(shape.params, pathParams)
  const query = shape.query ? parseInput(shape.query, getQuery(event)) : undefined
  const body = shape.body === 'stream' ? undefined : await readBody(event, shape.body, shape.unstoredKeys ?? [])
  return { event, requestId: requestIdOf(event), params, query, body } as Input<P, Q, B>
}

/** A route without a body schema takes no body, or an empty JSON object from clients that always send one. */
const readBody = async (event: H3Event, schema: Schema | undefined, unstored: readonly string[]): Promise<unknown> => {
  if (!schema && !hasBody(event)) return undefined
  requireMediaType(event, 'application/json')
  const value = parseBody(await readLimited(event, limits.jsonBytes))
  const unstorable = findUnstorableText(value, unstored)
  if (unstorable.length > 0) throw new AppError('input/invalid', { issues: unstorable })
  return parseInput(schema ?? z.strictObject({}), value)
}

/** Session row of this request, or 401. */
export const requireSignedIn = async (event: H3Event): Promise<SignedIn> => {
  const token = await readSessionToken(event)
  const signedIn = token ? await findSignedIn(token) : null
  if (!signedIn) throw new AppError('session/required')
  return signedIn
}

const GroupIdSchema = z.uuid()

/**
 * A route of one group. Session, membership and role are settled before the parameters, the query or the body are
 * looked at, and the handler gets the group id from here only.
 */
export const defineGroupRoute = <
  P extends Schema | undefined = undefined,
  Q extends Schema | undefined = undefined,
  B extends Schema | 'stream' | undefined = undefined,
>(
  shape: Shape<P, Q, B> & {
    access: Role
    handler: (input: Input<P, Q, B> & SignedIn & { groupId: string; role: Role }) => unknown
  },
) =>
  defineEventHandler(async (event) => {
    const signedIn = await requireSignedIn(event)
    const { groupId: givenId, ...pathParams } = getRouterParams(event, { decode: true })
    const groupId = GroupIdSchema.safeParse(givenId)
    if (!groupId.success) throw new AppError('request/not-found')
    const role = await requireMembership(groupId.data, signedIn.user.id, shape.access)
    const input = await readInput(event, shape, pathParams)
    return sendAnswer(event, await shape.handler({ ...input, ...signedIn, groupId: groupId.data, role }), shape.status)
  })

/** A route of the signed-in person, outside any group. */
export const defineAccountRoute = <
  P extends Schema | undefined = undefined,
  Q extends Schema | undefined = undefined,
  B extends Schema | 'stream' | undefined = undefined,
>(
  shape: Shape<P, Q, B> & { handler: (input: Input<P, Q, B> & SignedIn) => unknown },
) =>
  defineEventHandler(async (event) => {
    const signedIn = await requireSignedIn(event)
    const input = await readInput(event, shape, getRouterParams(event, { decode: true }))
    return sendAnswer(event, await shape.handler({ ...input, ...signedIn }), shape.status)
  })

/** A route that anyone may call. */
export const definePublicRoute = <
  P extends Schema | undefined = undefined,
  Q extends Schema | undefined = undefined,
  B extends Schema | 'stream' | undefined = undefined,
>(
  shape: Shape<P, Q, B> & { handler: (input: Input<P, Q, B>) => unknown },
) =>
  defineEventHandler(async (event) => {
    const input = await readInput(event, shape, getRouterParams(event, { decode: true }))
    return sendAnswer(event, await shape.handler(input), shape.status)
  })
