import { z } from 'zod'

/** Roles within a group, weakest first. */
export const roles = ['viewer', 'editor', 'owner'] as const
export const RoleSchema = z.enum(roles)
export type Role = z.infer<typeof RoleSchema>

/** True when `held` allows everything that `needed` allows. */
export const isAtLeast = (held: Role, needed: Role): boolean => roles.indexOf(held) >= roles.indexOf(needed)
