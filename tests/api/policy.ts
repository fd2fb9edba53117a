import { randomUUID } from 'node:crypto'
import type { Role } from '../../shared/schemas/roles'
import { measurementBody, smallReading, uploadBody } from './support/files'
import { smallSet, type ObjectIds, type ObjectKind } from './support/objects'
import { goodPassword } from './support/people'

/**
 * Who may call what: one entry for every file under server/api, written by hand and held against the running server.
 * A route without an entry, or an entry without a route, fails the tests.
 *
 *   access   public: anyone · account: whoever is signed in · viewer, editor, owner: at least that role in the group
 *   objects  kinds of object whose ids stand in the path, beside the group
 *   status   what an allowed caller gets
 *   body     a valid body, for routes that take one
 *   stream   the answer does not end by itself; the tests read its head only
 */
export interface RoutePolicy {
  access: 'public' | 'account' | Role
  objects?: ObjectKind[]
  status: number
  body?: (ids: ObjectIds) => unknown
  /** Raw body of another content type than JSON. */
  raw?: () => { contentType: string; body: Buffer }
  /** Fills further steps of the path, `[version]` for instance. */
  steps?: Record<string, string>
  stream?: boolean
}

const setBody = () => ({ name: `Set ${randomUUID()}`, parameters: smallSet() })

export const policy: Record<string, RoutePolicy> = {
  'health/live.get.ts': { access: 'public', status: 200 },
  'health/ready.get.ts': { access: 'public', status: 200 },

  'accounts/index.post.ts': {
    access: 'public',
    status: 201,
    body: () => ({ email: `${randomUUID()}@institute.example`, name: 'New Person', password: goodPassword }),
  },
  'session/index.get.ts': { access: 'public', status: 200 },
  'session/index.post.ts': {
    access: 'public',
    // The matrix signs in as somebody unknown; what a right password does is told in sessions.spec.ts.
    status: 401,
    body: () => ({ email: `${randomUUID()}@institute.example`, password: goodPassword }),
  },
  'session/index.delete.ts': { access: 'public', status: 204 },
  'session/confirmation.post.ts': { access: 'account', status: 204, body: () => ({ password: goodPassword }) },
  'sessions/index.get.ts': { access: 'account', status: 200 },
  'sessions/[sessionId].delete.ts': { access: 'account', objects: ['sessionId'], status: 204 },
  'account/password.put.ts': {
    access: 'account',
    status: 204,
    body: () => ({ currentPassword: goodPassword, newPassword: goodPassword }),
  },

  'groups/index.get.ts': { access: 'account', status: 200 },
  'groups/index.post.ts': { access: 'account', status: 201, body: () => ({ name: 'Another group' }) },
  'groups/[groupId]/index.get.ts': { access: 'viewer', status: 200 },

  'groups/[groupId]/sets/index.get.ts': { access: 'viewer', status: 200 },
  'groups/[groupId]/sets/index.post.ts': { access: 'editor', status: 201, body: setBody },
  'groups/[groupId]/sets/[setId]/index.get.ts': { access: 'viewer', objects: ['setId'], status: 200 },
  'groups/[groupId]/sets/[setId]/index.patch.ts': {
    access: 'editor',
    objects: ['setId'],
    status: 200,
    body: () => ({ name: `Renamed ${randomUUID()}` }),
  },
  'groups/[groupId]/sets/[setId]/index.delete.ts': { access: 'editor', objects: ['setId'], status: 204 },
  'groups/[groupId]/sets/[setId]/versions/index.get.ts': { access: 'viewer', objects: ['setId'], status: 200 },
  'groups/[groupId]/sets/[setId]/versions/index.post.ts': {
    access: 'editor',
    objects: ['setId'],
    status: 201,
    body: () => ({ parameters: smallSet({ temperaturesK: [4, 40] }), note: 'warmer', basedOn: 1 }),
  },
  'groups/[groupId]/sets/[setId]/versions/[version]/index.get.ts': {
    access: 'viewer',
    objects: ['setId'],
    steps: { version: '1' },
    status: 200,
  },
  'groups/[groupId]/sets/[setId]/versions/[version]/file.get.ts': {
    access: 'viewer',
    objects: ['setId'],
    steps: { version: '1' },
    status: 200,
  },

  'groups/[groupId]/events.get.ts': { access: 'viewer', status: 200, stream: true },
  'groups/[groupId]/runs/index.get.ts': { access: 'viewer', status: 200 },
  'groups/[groupId]/runs/index.post.ts': {
    access: 'editor',
    objects: ['setId'],
    status: 201,
    body: ({ setId }) => ({ setId, version: 1 }),
  },
  'groups/[groupId]/runs/[runId]/index.get.ts': { access: 'viewer', objects: ['runId'], status: 200 },
  'groups/[groupId]/runs/[runId]/cancel.post.ts': { access: 'editor', objects: ['runId'], status: 200 },
  'groups/[groupId]/runs/[runId]/retry.post.ts': { access: 'editor', objects: ['cancelledRunId'], status: 200 },
  'groups/[groupId]/runs/[runId]/arrays/[...key].get.ts': {
    access: 'viewer',
    objects: ['doneRunId'],
    steps: { key: 'spectralDensity/values' },
    status: 200,
  },

  'groups/[groupId]/files/index.post.ts': { access: 'editor', status: 201, raw: uploadBody },
  'groups/[groupId]/files/[fileId]/reading.post.ts': {
    access: 'editor',
    objects: ['fileId'],
    status: 200,
    body: () => ({ reading: smallReading }),
  },
  'groups/[groupId]/files/[fileId]/content.get.ts': { access: 'viewer', objects: ['fileId'], status: 200 },
  'groups/[groupId]/files/[fileId]/index.delete.ts': { access: 'editor', objects: ['fileId'], status: 204 },
  'groups/[groupId]/measurements/index.get.ts': { access: 'viewer', status: 200 },
  'groups/[groupId]/measurements/index.post.ts': {
    access: 'editor',
    objects: ['fileId'],
    status: 201,
    body: ({ fileId }) => measurementBody(fileId),
  },
  'groups/[groupId]/measurements/[measurementId]/index.get.ts': {
    access: 'viewer',
    objects: ['measurementId'],
    status: 200,
  },
  'groups/[groupId]/measurements/[measurementId]/index.delete.ts': {
    access: 'editor',
    objects: ['measurementId'],
    status: 204,
  },
}
