import { AppError } from '../../shared/errors/app-error'
import { limits } from '../../shared/utils/limits'

const gibibytes = (bytes: number) => `${Math.round((bytes / 1024 ** 3) * 10) / 10} GiB`

/** Refuses one more file when the group's room is used up. */
export const assertFileRoom = (used: { count: number; bytes: number }, addedBytes: number): void => {
  if (used.count >= limits.groupFiles)
    throw new AppError('quota/exceeded', { detail: `A group may hold at most ${limits.groupFiles} files.` })
  if (used.bytes + addedBytes > limits.groupFileBytes)
    throw new AppError('quota/exceeded', {
      detail: `The files of a group may take at most ${gibibytes(limits.groupFileBytes)}; ${gibibytes(used.bytes)} are in use.`,
    })
}

const running = new Map<string, number>()

/** Counts an upload of a person as running until the returned function is called. */
export const enterUpload = (userId: string): (() => void) => {
  const now = running.get(userId) ?? 0
  if (now >= limits.uploadsAtOnce)
    throw new AppError('quota/exceeded', {
      detail: `You may have at most ${limits.uploadsAtOnce} uploads running at once.`,
    })
  running.set(userId, now + 1)
  let left = false
  return () => {
    if (left) return
    left = true
    const count = (running.get(userId) ?? 1) - 1
    if (count > 0) running.set(userId, count)
    else running.delete(userId)
  }
}
