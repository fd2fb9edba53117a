/** The handlers of the built server, in the order in which the framework mounts them. */
declare module '#nitro-internal-virtual/server-handlers' {
  export const handlers: { route?: string; method?: string; middleware?: boolean; lazy?: boolean }[]
}
