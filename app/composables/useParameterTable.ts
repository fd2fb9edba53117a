import type { InjectionKey, Ref } from 'vue'
import type { Quantity } from '#shared/schemas/quantity'
import { parseQuantity } from '#shared/utils/parse-quantity'
import { valueAt, withValue, type DraftSet, type DraftValue, type Path } from '~/utils/draft'

export interface TableIssue {
  path: readonly PropertyKey[]
  message: string
}

/** What the margin note tells about the row that has the focus or the pointer. */
export interface RowNote {
  title: string
  quantity: Quantity | null
  text: string
}

export interface ParameterTableContext {
  draft: Ref<DraftSet>
  /** The other version, shown in a second column of values. */
  other: Ref<DraftSet | null>
  readonly: Ref<boolean>
  note: Ref<RowNote | null>
  set: (path: Path, value: DraftValue) => void
  /** The reason why the value at a path is refused, or an empty text. */
  issueFor: (path: Path, quantity?: Quantity) => string
}

const key: InjectionKey<ParameterTableContext> = Symbol('parameter table')

/** Groups that exist only while one of their fields does. */
const optionalGroups = ['grid']

const withoutEmptyGroups = (draft: DraftSet): DraftSet => {
  const empty = optionalGroups.filter((name) => {
    const group = draft[name]
    return typeof group === 'object' && Object.keys(group).length === 0
  })
  return empty.reduce((copy, name) => withValue(copy, [name], undefined), draft)
}

export const provideParameterTable = (options: {
  draft: Ref<DraftSet>
  other: Ref<DraftSet | null>
  readonly: Ref<boolean>
  issues: Ref<readonly TableIssue[]>
  update: (draft: DraftSet) => void
}): ParameterTableContext => {
  const { draft, other, readonly, issues } = options
  const byPath = computed(() => {
    const map = new Map<string, string>()
    for (const issue of issues.value) {
      const path = formatPath(issue.path)
      if (!map.has(path)) map.set(path, issue.message)
    }
    return map
  })
  const context: ParameterTableContext = {
    draft,
    other,
    readonly,
    note: shallowRef(null),
    set: (path, value) => options.update(withoutEmptyGroups(withValue(draft.value, path, value))),
    issueFor: (path, quantity) => {
      const value = valueAt(draft.value, path)
      if (typeof value === 'string' && quantity) {
        const parsed = parseQuantity(value, quantity)
        if (!parsed.ok) return parsed.message
      }
      return byPath.value.get(formatPath(path)) ?? ''
    },
  }
  provide(key, context)
  return context
}

export const useParameterTable = (): ParameterTableContext => {
  const context = inject(key)
  if (!context) throw new Error('A parameter row stands outside a parameter table.')
  return context
}
