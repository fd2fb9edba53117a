let loading: Promise<unknown> | undefined

/**
 * Waits until the figure font is there: canvas draws with whatever is loaded and never looks again. Covers the plain
 * and the semibold weight, Latin letters, superscripts and Greek, which live in separate files.
 */
export const loadFigureFont = (): Promise<unknown> => {
  const sample = 'meV ⁻¹₂ħσχΔ'
  loading ??= Promise.all([
    document.fonts?.load('400 12px "Source Sans 3"', sample),
    document.fonts?.load('600 12px "Source Sans 3"', sample),
  ]).catch(() => undefined)
  return loading
}
