import type { ShallowRef } from 'vue'
import { useElementSize } from '@vueuse/core'
import type { FigureFrame } from '#shared/figure/line-description'

/** Size and theme of a figure in the page: fluid width, light or dark, ready once its font has been loaded. */
export const useFigureFrame = (
  element: Readonly<ShallowRef<HTMLElement | null>>,
  heightOf: (width: number) => number,
) => {
  const { width } = useElementSize(element)
  const colorMode = useColorMode()
  const fontReady = ref(false)
  onMounted(() => loadFigureFont().then(() => (fontReady.value = true)))
  const frame = computed<FigureFrame>(() => {
    const rounded = Math.round(width.value)
    return { width: rounded, height: heightOf(rounded), mode: colorMode.value === 'dark' ? 'dark' : 'light' }
  })
  return { frame, ready: computed(() => fontReady.value && frame.value.width > 0) }
}
