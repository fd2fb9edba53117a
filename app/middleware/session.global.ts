/** Pages ask for a signed-in person unless they say `definePageMeta({ public: true })`. The server checks again. */
export default defineNuxtRouteMiddleware(async (to) => {
  const session = useSessionStore()
  try {
    await session.ensure()
  } catch (error) {
    return abortNavigation(
      createError({ statusCode: 503, statusMessage: 'Not reachable', message: messageOf(error), fatal: true }),
    )
  }
  if (!to.meta.public && !session.user) return navigateTo({ path: '/sign-in', query: { next: to.fullPath } })
  if (to.meta.guestsOnly && session.user) return navigateTo(toLocalPath(to.query.next))
})
