import { sql } from 'drizzle-orm'
import {
  boolean,
  customType,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgEnum,
  pgTable,
  text,
  timestamp,
  unique,
  uuid,
} from 'drizzle-orm/pg-core'
import type { RunSummary } from '../../../shared/schemas/run'
import { runStates } from '../../../shared/schemas/run'
import { users } from './accounts'
import { groups } from './groups'
import { parameterSetVersions } from './parameter-sets'
import { groupPolicy } from './tenancy'

const instant = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' })

/** Raw bytes as a Buffer. `pg` must stay in text mode for these (its binary mode damages bytea). */
export const bytea = customType<{ data: Buffer; driverData: Buffer }>({ dataType: () => 'bytea' })

export const runStateEnum = pgEnum('run_state', runStates)

/** A stored computation, named by the hash of what went in. Runs with equal input share it within a group. */
export const results = pgTable(
  'results',
  {
    id: uuid('id').primaryKey().defaultRandom(),
    groupId: uuid('group_id')
      .notNull()
      .references(() => groups.id, { onDelete: 'cascade' }),
    /** SHA-256 of the canonical JSON of { kind, engineVersion, parameters }. */
    inputHash: text('input_hash').notNull(),
    engineVersion: text('engine_version').notNull(),
    summary: jsonb('summary').$type<RunSummary>().notNull(),
    createdAt: instant('created_at').notNull().defaultNow(),
  },
  (table) => [unique('results_group_input').on(table.groupId, table.inputHash), groupPolicy('results')],
)

/** One array of a result: a spectrum, a slice or a component of a map, little-endian, row by row. */
export const resultArrays = pgTable(
  'result_arrays',
  {
    id: uuid('id').primaryKey().defaultRandom(),
    groupId: uuid('group_id')
      .notNull()
      .references(() => groups.id, { onDelete: 'cascade' }),
    resultId: uuid('result_id')
      .notNull()
      .references(() => results.id, { onDelete: 'cascade' }),
    /** Name within the result, for instance `absorption/0` or `map/0/2/rephasing`. */
    key: text('key').notNull(),
    dataType: text('data_type', { enum: ['float64', 'float32', 'complex128', 'complex64'] }).notNull(),
    shape: integer('shape').array().notNull(),
    unit: text('unit').notNull(),
    /** SHA-256 of the full-precision bytes, also where `bytes` holds float32 for display. */
    sha256: text('sha256').notNull(),
    bytes: bytea('bytes').notNull(),
  },
  (table) => [unique('result_arrays_result_key').on(table.resultId, table.key), groupPolicy('result_arrays')],
)

export const runs = pgTable(
  'runs',
  {
    id: uuid('id').primaryKey().defaultRandom(),
    groupId: uuid('group_id')
      .notNull()
      .references(() => groups.id, { onDelete: 'cascade' }),
    setVersionId: uuid('set_version_id')
      .notNull()
      .references(() => parameterSetVersions.id),
    inputHash: text('input_hash').notNull(),
    engineVersion: text('engine_version').notNull(),
    state: runStateEnum('state').notNull().default('queued'),
    /** 0 to 1, never falls within an attempt. */
    progress: doublePrecision('progress').notNull().default(0),
    secondsLeft: doublePrecision('seconds_left'),
    /** Rises with every start; the fencing token of results. */
    attempt: integer('attempt').notNull().default(0),
    /** Attempts whose worker died. Handing a run back at a shutdown does not count. */
    losses: integer('losses').notNull().default(0),
    /** The waiting or active entry of the queue. */
    jobId: uuid('job_id'),
    cancelRequested: boolean('cancel_requested').notNull().default(false),
    failure: jsonb('failure').$type<{ code: string; message: string }>(),
    resultId: uuid('result_id').references(() => results.id),
    requestedBy: uuid('requested_by')
      .notNull()
      .references(() => users.id),
    queuedAt: instant('queued_at').notNull().defaultNow(),
    startedAt: instant('started_at'),
    finishedAt: instant('finished_at'),
    /** Milliseconds of computation of the attempt that finished. */
    computeMs: doublePrecision('compute_ms'),
    /** Last change of state or progress; event streams resume from it. */
    changedAt: instant('changed_at').notNull().defaultNow(),
  },
  (table) => [
    index('runs_group_queued_index').on(table.groupId, table.queuedAt),
    index('runs_group_changed_index').on(table.groupId, table.changedAt),
    index('runs_group_unfinished_index')
      .on(table.groupId, table.inputHash)
      .where(sql`${table.state} in ('queued', 'running')`),
    index('runs_set_version_index').on(table.setVersionId),
    groupPolicy('runs'),
  ],
)

/**
 * Heartbeats of running attempts, kept outside the groups' fence because the rescuer looks at all of them. Holds ids
 * only. The attempt number is the fencing token: a result is written only by the attempt that still owns the row.
 */
export const runAttempts = pgTable('run_attempts', {
  runId: uuid('run_id').primaryKey(),
  groupId: uuid('group_id').notNull(),
  jobId: text('job_id').notNull(),
  attempt: integer('attempt').notNull(),
  workerId: text('worker_id').notNull(),
  startedAt: instant('started_at').notNull().defaultNow(),
  heartbeatAt: instant('heartbeat_at').notNull().defaultNow(),
})

/**
 * Turns at the queue, so that groups take turns however many runs one of them queues. A run gets the turn after its
 * group's last one, but never an earlier turn than the one being served; the queue serves the lowest turn first.
 */
export const queueTurns = pgTable('queue_turns', {
  groupId: uuid('group_id')
    .primaryKey()
    .references(() => groups.id, { onDelete: 'cascade' }),
  /** Turn given to the run that this group queued last. */
  queuedTurn: integer('queued_turn').notNull(),
  /** Highest turn of this group that was served. */
  servedTurn: integer('served_turn').notNull().default(0),
})
