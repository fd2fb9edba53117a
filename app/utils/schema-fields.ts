import { z } from 'zod'
import type { Quantity } from '#shared/schemas/quantity'

/** One editable field of an object schema, as far as a form must know it. */
export type SchemaField = { path: string[]; optional: boolean } & (
  | { type: 'quantity'; quantity: Quantity }
  | { type: 'choice'; options: string[] }
  | { type: 'numbers'; quantity: Quantity | undefined }
  | { type: 'text' }
)

const isQuantity = (value: unknown): value is Quantity =>
  typeof value === 'object' && value !== null && 'symbol' in value && 'unit' in value

const unwrap = (schema: z.core.$ZodType): { schema: z.core.$ZodType; optional: boolean } => {
  if (schema instanceof z.ZodOptional) return { schema: unwrap(schema.unwrap()).schema, optional: true }
  if (schema instanceof z.ZodDefault) return unwrap(schema.unwrap())
  return { schema, optional: false }
}

/**
 * The fields of an object schema in its own order; nested objects are walked through, the literal that tells union
 * members apart is left out. A form built from this needs no second list of what a bath term has.
 */
export const schemaFields = (object: z.ZodObject, parent: string[] = []): SchemaField[] =>
  Object.entries(object.shape).flatMap(([key, wrapped]): SchemaField[] => {
    const { schema, optional } = unwrap(wrapped)
    const path = [...parent, key]
    const quantity = schema instanceof z.ZodType ? schema.meta()?.quantity : undefined
    if (schema instanceof z.ZodLiteral) return []
    if (isQuantity(quantity)) return [{ path, optional, type: 'quantity', quantity }]
    if (schema instanceof z.ZodEnum) return [{ path, optional, type: 'choice', options: schema.options.map(String) }]
    if (schema instanceof z.ZodObject) return schemaFields(schema, path)
    if (schema instanceof z.ZodArray) {
      const element = unwrap(schema.element).schema
      const each = element instanceof z.ZodType ? element.meta()?.quantity : undefined
      return [{ path, optional, type: 'numbers', quantity: isQuantity(each) ? each : undefined }]
    }
    return [{ path, optional, type: 'text' }]
  })
