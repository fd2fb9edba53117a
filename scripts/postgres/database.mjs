import { join } from 'node:path'
import { passwordOf, query, startCluster } from './cluster.mjs'
import { withLock } from './lock.mjs'

export const ownerRole = 'linewright_owner'
export const applicationRole = 'linewright'

const checkName = (name) => {
  if (!/^[a-z_][a-z0-9_]{0,62}$/.test(name)) {
    throw new Error(`database name "${name}": expected lower-case letters, digits and underscores, at most 63`)
  }
}

// Passwords are letters of base64url, so they need no quoting beyond the quotes themselves.
// A failed statement would be written to the server's log in full, passwords and all; hence the first line.
const roleSql = (cluster) => `
set log_min_error_statement = panic;
do $$ begin
  if not exists (select from pg_roles where rolname = '${ownerRole}') then create role ${ownerRole} login; end if;
  if not exists (select from pg_roles where rolname = '${applicationRole}') then create role ${applicationRole} login; end if;
end $$;
alter role ${ownerRole} login nosuperuser nocreatedb nocreaterole noreplication nobypassrls password '${passwordOf(cluster, ownerRole)}';
alter role ${applicationRole} login nosuperuser nocreatedb nocreaterole noreplication nobypassrls password '${passwordOf(cluster, applicationRole)}';
alter role ${applicationRole} set statement_timeout = '15s';
alter role ${applicationRole} set idle_in_transaction_session_timeout = '30s';
`

const urlOf = (cluster, role, name) =>
  `postgres://${role}:${encodeURIComponent(passwordOf(cluster, role))}@127.0.0.1:${cluster.port}/${name}`

/**
 * Makes a database in the private cluster, or finds it: owned by the owner role, which runs the migrations; the
 * application role may connect and make the queue's schema, nothing more until a migration grants it.
 * @param {string} name
 */
export const createDatabase = async (name, options = {}) => {
  checkName(name)
  const cluster = await startCluster(options)
  const created = await withLock(join(cluster.folder, 'database.lock'), {}, () => {
    if (query(cluster, 'postgres', `select 1 from pg_database where datname = '${name}'`) === '1') return false
    query(cluster, 'postgres', roleSql(cluster))
    query(cluster, 'postgres', `create database ${name} owner ${ownerRole}`)
    query(
      cluster,
      name,
      `revoke all on database ${name} from public;
       grant connect, create, temporary on database ${name} to ${applicationRole};
       alter schema public owner to ${ownerRole};
       grant usage on schema public to ${applicationRole};`,
    )
    return true
  })
  return {
    DATABASE_URL: urlOf(cluster, applicationRole, name),
    DATABASE_OWNER_URL: urlOf(cluster, ownerRole, name),
    created,
    started: cluster.started,
  }
}

/** Removes a database and ends every connection to it. For tests. */
export const dropDatabase = async (name) => {
  checkName(name)
  const cluster = await startCluster()
  query(cluster, 'postgres', `drop database if exists ${name} with (force)`)
}

/** The product's database: the given one (`DATABASE_URL`), else `linewright` in the private cluster. */
export const openDatabase = async () => {
  const given = process.env.DATABASE_URL
  if (!given) return createDatabase('linewright')
  return {
    DATABASE_URL: given,
    DATABASE_OWNER_URL: process.env.DATABASE_OWNER_URL || given,
    created: false,
    started: false,
  }
}
