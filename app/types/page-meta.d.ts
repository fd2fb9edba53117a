declare module '#app' {
  interface PageMeta {
    /** Shown without signing in. */
    public?: boolean
    /** Only for people who are not signed in (sign-in, registration). */
    guestsOnly?: boolean
  }
}

export {}
