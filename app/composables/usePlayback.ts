/** Calls `advance` at an even pace while playing; stops with the component and when the page is hidden. */
export const usePlayback = (advance: () => void, intervalMs = 700) => {
  const playing = ref(false)
  let timer: ReturnType<typeof setInterval> | undefined

  const stop = () => {
    clearInterval(timer)
    timer = undefined
    playing.value = false
  }
  const play = () => {
    if (playing.value) return stop()
    playing.value = true
    advance()
    timer = setInterval(() => (document.hidden ? stop() : advance()), intervalMs)
  }

  onScopeDispose(stop)
  return { playing: readonly(playing), play, stop }
}
