/** Hands a file to the browser's downloads. The name is cleaned of what file systems refuse. */
export const saveFile = (name: string, content: Blob | string, type = 'text/plain;charset=utf-8'): void => {
  const blob = typeof content === 'string' ? new Blob([content], { type }) : content
  const url = URL.createObjectURL(blob)
  const link = document.createElement('a')
  link.href = url
  link.download = toFileName(name)
  document.body.append(link)
  link.click()
  link.remove()
  // The download has the data by the next task; revoking at once cancels it in some browsers.
  setTimeout(() => URL.revokeObjectURL(url), 10_000)
}

/** Letters, digits, dot, dash and underscore survive; everything else becomes a dash. */
export const toFileName = (name: string): string =>
  name
    .normalize('NFKC')
    .replace(/[^\p{L}\p{N}._-]+/gu, '-')
    .replace(/-{2,}/g, '-')
    .replace(/^[-.]+|[-.]+$/g, '')
    .slice(0, 120) || 'figure'
