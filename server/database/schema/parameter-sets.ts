import { index, integer, jsonb, pgTable, text, timestamp, unique, uuid } from 'drizzle-orm/pg-core'
import type { ParameterSet } from '../../../shared/schemas/parameter-set'
import { users } from './accounts'
import { groups } from './groups'
import { groupPolicy } from './tenancy'

const instant = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' })

export const parameterSets = pgTable(
  'parameter_sets',
  {
    id: uuid('id').primaryKey().defaultRandom(),
    groupId: uuid('group_id')
      .notNull()
      .references(() => groups.id, { onDelete: 'cascade' }),
    name: text('name').notNull(),
    latestVersion: integer('latest_version').notNull().default(1),
    createdBy: uuid('created_by')
      .notNull()
      .references(() => users.id),
    createdAt: instant('created_at').notNull().defaultNow(),
    updatedAt: instant('updated_at').notNull().defaultNow(),
  },
  (table) => [
    unique('parameter_sets_group_name').on(table.groupId, table.name),
    index('parameter_sets_group_updated_index').on(table.groupId, table.updatedAt),
    groupPolicy('parameter_sets'),
  ],
)

/** Immutable: saving again makes the next version. */
export const parameterSetVersions = pgTable(
  'parameter_set_versions',
  {
    id: uuid('id').primaryKey().defaultRandom(),
    groupId: uuid('group_id')
      .notNull()
      .references(() => groups.id, { onDelete: 'cascade' }),
    setId: uuid('set_id')
      .notNull()
      .references(() => parameterSets.id, { onDelete: 'cascade' }),
    version: integer('version').notNull(),
    parameters: jsonb('parameters').$type<ParameterSet>().notNull(),
    /** SHA-256 of the canonical JSON of `parameters`. */
    contentHash: text('content_hash').notNull(),
    note: text('note').notNull().default(''),
    createdBy: uuid('created_by')
      .notNull()
      .references(() => users.id),
    createdAt: instant('created_at').notNull().defaultNow(),
  },
  (table) => [
    unique('parameter_set_versions_set_version').on(table.setId, table.version),
    index('parameter_set_versions_hash_index').on(table.groupId, table.contentHash),
    groupPolicy('parameter_set_versions'),
  ],
)
