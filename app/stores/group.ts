import { defineStore } from 'pinia'
import { isAtLeast } from '#shared/schemas/roles'
import type { GroupDetail } from '~/types/api'

/** The group whose pages are open: its name, the reader's role in it, its counts. */
export const useGroupStore = defineStore('group', () => {
  const api = useApi()
  const detail = shallowRef<GroupDetail | null>(null)
  const canEdit = computed(() => detail.value !== null && isAtLeast(detail.value.role, 'editor'))
  const isOwner = computed(() => detail.value?.role === 'owner')

  const refresh = async (groupId: string): Promise<void> => {
    detail.value = await api.get<GroupDetail>(`/groups/${groupId}`)
  }

  const enter = async (groupId: string): Promise<void> => {
    if (detail.value?.id === groupId) return
    detail.value = null
    await refresh(groupId)
  }

  return { detail, canEdit, isOwner, enter, refresh }
})
