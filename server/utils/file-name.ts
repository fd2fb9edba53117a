import { limits } from '../../shared/utils/limits'

const reserved = /^(?:con|prn|aux|nul|com[0-9]|lpt[0-9])(?:\.|$)/i

/**
 * A name that can be shown and offered for saving: no folder, no control or invisible characters, no signs that some
 * system reserves, at most 200 characters with the extension kept. It is never used as a path.
 */
export const cleanFileName = (given: string): string => {
  const last = given.toWellFormed().normalize('NFC').split(/[/\\]/).at(-1) ?? ''
  const visible = last
    .replace(/[\p{C}\p{Zl}\p{Zp}\ufffd]/gu, '')
    .replace(/[<>:"|?*]/g, '_')
    .replace(/\s+/gu, ' ')
    .replace(/^[. ]+|[. ]+$/g, '')
  const safe = reserved.test(visible) ? `_${visible}` : visible
  if (safe === '') return 'file'
  const characters = [...safe]
  if (characters.length <= limits.nameLength) return safe
  const extension = /\.[^.]{1,16}$/u.exec(safe)?.[0] ?? ''
  const kept = limits.nameLength - [...extension].length
  return `${characters.slice(0, kept).join('')}${extension}`
}
