import { registerEndpoint } from '@nuxt/test-utils/runtime'

// Every page asks once who is signed in; here nobody is, unless a spec answers otherwise.
registerEndpoint('/api/session', () => ({ user: null, groups: [] }))
