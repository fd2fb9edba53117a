export default defineNuxtPlugin(() => {
  const workingSets = useWorkingSetStore()
  window.addEventListener('beforeunload', (event) => {
    if (workingSets.hasEdits) event.preventDefault()
  })
})
