import { defineStore } from 'pinia'
import type { GroupRef, SessionAnswer, User } from '~/types/api'

/** Who is signed in, and the groups they belong to. */
export const useSessionStore = defineStore('session', () => {
  const api = useApi()
  const user = ref<User | null>(null)
  const groups = ref<GroupRef[]>([])
  const known = ref(false)
  let loading: Promise<void> | undefined

  /** Unsaved work in memory belongs to this person and to nobody who signs in after them. */
  let workOf: string | undefined

  const accept = (answer: SessionAnswer) => {
    if (answer.user && workOf !== answer.user.id) useWorkingSetStore().clear()
    workOf = answer.user?.id ?? workOf
    user.value = answer.user
    groups.value = answer.groups
    known.value = true
  }

  const refresh = async (): Promise<void> => accept(await api.get<SessionAnswer>('/session'))

  /** Loads the session once; later calls are free. */
  const ensure = async (): Promise<void> => {
    if (known.value) return
    loading ??= refresh().finally(() => (loading = undefined))
    await loading
  }

  const forget = () => {
    accept({ user: null, groups: [] })
    useRunsStore().leave()
    useWorkingSetStore().clear()
  }

  const signIn = async (email: string, password: string): Promise<void> => {
    await api.post('/session', { email, password })
    await refresh()
  }

  const register = async (account: { email: string; name: string; password: string }): Promise<void> => {
    await api.post('/accounts', account)
    await refresh()
  }

  const signOut = async (): Promise<void> => {
    await api.remove('/session')
    forget()
    await navigateTo('/')
  }

  /** Called when the server no longer knows our session: keep unsaved work in memory, ask to sign in again. */
  const onSessionLost = async (): Promise<void> => {
    if (!user.value) return
    accept({ user: null, groups: [] })
    useRunsStore().leave()
    const here = useRouter().currentRoute.value
    if (!here.meta.public) await navigateTo({ path: '/sign-in', query: { next: here.fullPath, ended: '1' } })
  }

  return { user, groups, known, ensure, refresh, signIn, register, signOut, onSessionLost }
})
