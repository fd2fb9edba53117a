import {
  boolean,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  timestamp,
  unique,
  uuid,
} from 'drizzle-orm/pg-core'
import type { TableReading } from '../../../shared/schemas/measurement'
import { users } from './accounts'
import { groups } from './groups'
import { bytea } from './runs'
import { groupPolicy } from './tenancy'

const instant = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' })

/** An uploaded file, kept byte for byte in storage under a generated key. */
export const files = pgTable(
  'files',
  {
    id: uuid('id').primaryKey().defaultRandom(),
    groupId: uuid('group_id')
      .notNull()
      .references(() => groups.id, { onDelete: 'cascade' }),
    storageKey: text('storage_key').notNull().unique(),
    /** Cleaned name for display and download; never used as a path. */
    name: text('name').notNull(),
    byteLength: integer('byte_length').notNull(),
    sha256: text('sha256').notNull(),
    createdBy: uuid('created_by')
      .notNull()
      .references(() => users.id),
    createdAt: instant('created_at').notNull().defaultNow(),
  },
  (table) => [index('files_group_index').on(table.groupId), groupPolicy('files')],
)

export const measurements = pgTable(
  'measurements',
  {
    id: uuid('id').primaryKey().defaultRandom(),
    groupId: uuid('group_id')
      .notNull()
      .references(() => groups.id, { onDelete: 'cascade' }),
    fileId: uuid('file_id')
      .notNull()
      .references(() => files.id),
    name: text('name').notNull(),
    kind: text('kind', { enum: ['absorption', 'emission'] }).notNull(),
    sampleName: text('sample_name').notNull().default(''),
    temperatureK: doublePrecision('temperature_k'),
    isInvented: boolean('is_invented').notNull().default(false),
    note: text('note').notNull().default(''),
    /** How the file was understood, as confirmed by the person. */
    reading: jsonb('reading').$type<TableReading>().notNull(),
    pointCount: integer('point_count').notNull(),
    /** float64 little-endian, ascending energy in meV. */
    energiesMeV: bytea('energies_mev').notNull(),
    values: bytea('values').notNull(),
    /** Standard uncertainty of each value; null where the file had none. */
    uncertainties: bytea('uncertainties'),
    createdBy: uuid('created_by')
      .notNull()
      .references(() => users.id),
    createdAt: instant('created_at').notNull().defaultNow(),
  },
  (table) => [
    unique('measurements_group_name').on(table.groupId, table.name),
    index('measurements_group_created_index').on(table.groupId, table.createdAt),
    groupPolicy('measurements'),
  ],
)
