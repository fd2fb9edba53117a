import { z } from 'zod'

// The content security policy forbids code made from text; without this zod would try it once and be reported.
z.config({ jitless: true })

export default defineNuxtPlugin(() => {
  const workingSets = useWorkingSetStore()
  window.addEventListener('beforeunload', (event) => {
    if (workingSets.hasEdits) event.preventDefault()
  })
})
