import { registerEndpoint } from '@nuxt/test-utils/runtime'
import { createError, readBody } from 'h3'
import { beforeEach, describe, expect, it } from 'vitest'
import { effectScope } from 'vue'
import { ParameterSetSchema } from '#shared/schemas/parameter-set'
import { useSetEditor } from '~/composables/useSetEditor'
import { useWorkingSetStore } from '~/stores/working-set'
import { newDraft, withValue } from '~/utils/draft'

const set = ParameterSetSchema.parse(newDraft())
const person = { id: 'p', name: 'Ida Moor' }
const state = { latest: 1, saves: [] as { basedOn: number }[] }
const detail = () => ({
  id: 's',
  name: 'Heron dots',
  latestVersion: state.latest,
  updatedAt: '2026-01-01T00:00:00.000Z',
  version: {
    version: state.latest,
    parameters: state.latest === 1 ? set : { ...set, zeroPhononFwhmMeV: 0.7 },
    contentHash: 'h',
    note: '',
    createdAt: '2026-01-01T00:00:00.000Z',
    createdBy: person,
  },
})
registerEndpoint('/api/groups/g/sets/s', detail)
registerEndpoint('/api/groups/g/sets/s/versions', {
  method: 'POST',
  handler: async (event) => {
    const body = (await readBody(event)) as { basedOn: number; parameters: unknown }
    state.saves.push(body)
    if (body.basedOn !== state.latest) {
      const problem = { code: 'object/version-conflict', detail: 'newer', status: 409 }
      throw createError({ statusCode: 409, message: 'newer', data: problem })
    }
    state.latest += 1
    return { ...detail(), version: { ...detail().version, parameters: body.parameters } }
  },
})

const open = async () => {
  const scope = effectScope()
  const editor = scope.run(() => useSetEditor('g', 's'))
  if (!editor) throw new Error('no editor')
  await waitUntil(() => editor.working.value !== undefined && editor.latest.value !== null)
  return { editor, leave: () => scope.stop() }
}
const waitUntil = async (condition: () => boolean) => {
  for (let i = 0; i < 200 && !condition(); i++) await new Promise((resolve) => setTimeout(resolve, 10))
  expect(condition()).toBe(true)
}

beforeEach(() => {
  useWorkingSetStore().clear()
  state.latest = 1
  state.saves = []
})

describe('an open set', () => {
  it('is not edited when it is opened, nor after a change that is taken back', async () => {
    const { editor } = await open()
    expect(editor.isEdited.value).toBe(false)
    editor.draft.value = withValue(editor.draft.value, ['zeroPhononFwhmMeV'], 0.5)
    expect(editor.isEdited.value).toBe(true)
    expect(useWorkingSetStore().hasEdits).toBe(true)
    editor.draft.value = withValue(editor.draft.value, ['zeroPhononFwhmMeV'], 0.1)
    expect(editor.isEdited.value).toBe(false)
  })

  it('keeps its edits, readable or not, while its page is away', async () => {
    const first = await open()
    first.editor.draft.value = withValue(first.editor.draft.value, ['zeroPhononFwhmMeV'], 'half a meV')
    first.leave()
    const { editor } = await open()
    expect(editor.draft.value.zeroPhononFwhmMeV).toBe('half a meV')
    expect(editor.parsed.value.success).toBe(false)
    expect(editor.isEdited.value).toBe(true)
  })

  it('without edits it follows a version that someone else saved', async () => {
    const first = await open()
    first.leave()
    state.latest = 2
    const { editor } = await open()
    expect(editor.working.value?.basedOn).toBe(2)
    expect(editor.draft.value.zeroPhononFwhmMeV).toBe(0.7)
  })

  it('with edits it keeps them and tells of the newer version', async () => {
    const first = await open()
    first.editor.draft.value = withValue(first.editor.draft.value, ['ensembleFwhmMeV'], 3)
    first.leave()
    state.latest = 2
    const { editor } = await open()
    expect(editor.newerVersion.value).toBe(2)
    expect(editor.draft.value.ensembleFwhmMeV).toBe(3)
    expect(editor.working.value?.basedOn).toBe(1)
  })

  it('a save rests on the version that was edited, and a later one on what was saved', async () => {
    const { editor } = await open()
    editor.draft.value = withValue(editor.draft.value, ['ensembleFwhmMeV'], 3)
    await editor.save('', 'wider')
    editor.draft.value = withValue(editor.draft.value, ['ensembleFwhmMeV'], 4)
    await editor.save('', '')
    expect(state.saves.map((save) => save.basedOn)).toEqual([1, 2])
    expect(editor.isEdited.value).toBe(false)
    expect(editor.working.value?.basedOn).toBe(3)
  })

  it('an invalid set is refused here, before anything is sent', async () => {
    const { editor } = await open()
    editor.draft.value = withValue(editor.draft.value, ['ensembleFwhmMeV'], -3)
    await expect(editor.save('', '')).rejects.toMatchObject({
      code: 'input/invalid',
      issues: [{ path: ['parameters', 'ensembleFwhmMeV'] }],
    })
    expect(state.saves).toEqual([])
  })
})
