import type { TableProposal, TableReading } from '#shared/schemas/measurement'
import type { UploadedFile } from '~/types/measurement'

type Field = keyof TableReading

/**
 * The reading of an uploaded file while a person corrects it. Every change is sent and answered with what the server now
 * understands; the last answer that could be read stays in sight. What a person has set counts as decided.
 */
export const useReading = (groupId: () => string) => {
  const api = useApi()
  const file = shallowRef<UploadedFile | null>(null)
  const proposal = shallowRef<TableProposal | null>(null)
  const reading = shallowRef<TableReading | null>(null)
  const answered = ref<Field[]>([])
  const error = shallowRef<unknown>(null)
  const pending = ref(false)
  let current: AbortController | undefined

  const open = (uploaded: UploadedFile) => {
    current?.abort()
    file.value = uploaded
    proposal.value = uploaded.proposal
    reading.value = uploaded.proposal.reading
    answered.value = []
    error.value = null
    pending.value = false
  }

  const send = async () => {
    const uploaded = file.value
    if (!uploaded || !reading.value) return
    current?.abort()
    const mine = (current = new AbortController())
    pending.value = true
    try {
      const path = `/groups/${groupId()}/files/${uploaded.id}/reading`
      const body = { reading: reading.value, answered: answered.value }
      const answer = await api.post<UploadedFile>(path, body, { signal: mine.signal })
      if (mine.signal.aborted) return
      proposal.value = answer.proposal
      reading.value = answer.proposal.reading
      error.value = null
    } catch (failure) {
      if (!mine.signal.aborted) error.value = failure
    } finally {
      if (current === mine) pending.value = false
    }
  }

  /** Merges a change; `field` is the question it answers, else its own keys are what was decided. */
  const change = (part: Partial<TableReading>, field?: Field) => {
    if (!reading.value) return
    const next = { ...reading.value, ...part }
    // The wavelength factor and the medium belong to wavelengths only.
    if (next.axisUnit !== 'nm') Object.assign(next, { applyJacobian: false, wavelengthMedium: 'vacuum' })
    reading.value = next
    const decided = field ? [field] : (Object.keys(part) as Field[])
    answered.value = [...new Set([...answered.value, ...decided])]
    void send()
  }

  /** Forgets the file and takes it from the server, when no measurement was made of it. */
  const discard = () => {
    current?.abort()
    const uploaded = file.value
    file.value = null
    proposal.value = null
    reading.value = null
    if (uploaded) api.remove(`/groups/${groupId()}/files/${uploaded.id}`).catch(() => undefined)
  }
  /** Forgets the file, which a measurement now rests on. */
  const release = () => {
    current?.abort()
    file.value = null
  }

  const issues = computed(() => (error.value instanceof ApiError ? error.value.issues : []))
  const issueFor = (field: Field): string => issueAt(issues.value, ['reading', field]) || issueAt(issues.value, [field])
  const questions = computed(() => proposal.value?.needsAnswer ?? [])
  const isSettled = computed(() => questions.value.length === 0 && error.value === null && !pending.value)
  onScopeDispose(() => current?.abort())
  return {
    file,
    proposal,
    reading,
    error,
    pending: readonly(pending),
    questions,
    isSettled,
    issueFor,
    open,
    change,
    discard,
    release,
  }
}
export type Reading = ReturnType<typeof useReading>
