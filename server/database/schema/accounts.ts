import { boolean, index, integer, pgTable, text, timestamp, uuid } from 'drizzle-orm/pg-core'

const instant = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' })

export const users = pgTable('users', {
  id: uuid('id').primaryKey().defaultRandom(),
  /** Lower case; unique, so that one address is one account. */
  email: text('email').notNull().unique(),
  name: text('name').notNull(),
  passwordHash: text('password_hash').notNull(),
  isDemo: boolean('is_demo').notNull().default(false),
  isAdministrator: boolean('is_administrator').notNull().default(false),
  disabledAt: instant('disabled_at'),
  createdAt: instant('created_at').notNull().defaultNow(),
})

/** One row a signed-in browser. The cookie carries a random token, this table only its SHA-256. */
export const sessions = pgTable(
  'sessions',
  {
    id: uuid('id').primaryKey().defaultRandom(),
    tokenHash: text('token_hash').notNull().unique(),
    userId: uuid('user_id')
      .notNull()
      .references(() => users.id, { onDelete: 'cascade' }),
    userAgent: text('user_agent').notNull().default(''),
    createdAt: instant('created_at').notNull().defaultNow(),
    lastSeenAt: instant('last_seen_at').notNull().defaultNow(),
    /** When the password was last given in this session. */
    confirmedAt: instant('confirmed_at').notNull().defaultNow(),
    expiresAt: instant('expires_at').notNull(),
  },
  (table) => [index('sessions_user_id_index').on(table.userId)],
)

/** Failed sign-ins by account and by address; PostgreSQL counts, so every instance sees the same number. */
export const signInFailures = pgTable('sign_in_failures', {
  /** `account:<sha256>` or `address:<ip>`. */
  key: text('key').primaryKey(),
  failures: integer('failures').notNull().default(0),
  windowStartedAt: instant('window_started_at').notNull().defaultNow(),
  blockedUntil: instant('blocked_until'),
})
