import { importCompiled } from './compile.mjs'
import { inCache, projectRoot } from './paths.mjs'

/**
 * Loads the invented demo into the local database, once. The loader runs the product's own services, which read their
 * settings from the environment; it gets them for the time of the call only.
 * @param {Record<string, string>} env as the server will have it
 */
export const loadDemo = async (env) => {
  // Not at the top: it needs packages, and the scripts start before any are installed.
  const { bundleWorkers } = await import('../bundle-workers.mjs')
  const before = { ...process.env }
  const workers = inCache('workers')
  await bundleWorkers({ root: projectRoot, outdir: workers })
  const { loadDemo: load } = await importCompiled('scripts/demo/load-demo.ts', 'demo')
  try {
    Object.assign(process.env, env, { WORKERS_DIR: workers })
    return await load({ databaseUrl: env.DATABASE_URL, storageDir: env.NUXT_STORAGE_DIR })
  } finally {
    for (const name of Object.keys(process.env)) if (!(name in before)) delete process.env[name]
    Object.assign(process.env, before)
  }
}

/** Who may sign in to the demo. Passwords are printed when they were just made, later only their file. */
export const printDemo = ({ accounts, groupName, isNew, passwordFile }) => {
  console.log(`Demo accounts of "${groupName}":`)
  for (const { role, email, password } of accounts) {
    console.log(`  ${role.padEnd(7)} ${email}${isNew ? `  ${password}` : ''}`)
  }
  console.log(isNew ? `Their passwords are kept in ${passwordFile}` : `Their passwords: ${passwordFile}`)
}
