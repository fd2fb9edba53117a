/**
 * A typed formula of one variable as a function, by way of its syntax tree: the text is parsed, never run as a script, and
 * only numbers, E, pi, e, the operators + - * / ^ and the functions listed here are understood. Precedence is that of the
 * parser of mathjs; the tree is turned into closures here. Definition of each function: ECMAScript `Math`.
 * Spec: tests/engine/expression-bath.spec.ts.
 */
import { create, parseDependencies, type MathNode } from 'mathjs/number'

const { parse } = create({ ...parseDependencies })

export const formulaFunctions = {
  exp: Math.exp,
  log: Math.log,
  sqrt: Math.sqrt,
  sin: Math.sin,
  cos: Math.cos,
  sinh: Math.sinh,
  cosh: Math.cosh,
  tanh: Math.tanh,
  atan: Math.atan,
} as const

const constants: Record<string, number> = { pi: Math.PI, e: Math.E }

const operators: Record<string, (a: number, b: number) => number> = {
  add: (a, b) => a + b,
  subtract: (a, b) => a - b,
  multiply: (a, b) => a * b,
  divide: (a, b) => a / b,
  pow: (a, b) => Math.pow(a, b),
}

type Compiled = (energyMeV: number) => number

/** What a formula may hold, for error texts. */
export const formulaLanguage = `numbers, E (the energy in meV), pi, e, + - * / ^, brackets and ${Object.keys(formulaFunctions).join(', ')}`

const refuse = (found: string): never => {
  throw new RangeError(`expected ${formulaLanguage}; found ${found}`)
}

interface TreeNode extends MathNode {
  value?: unknown
  name?: string
  fn?: string | { name?: string }
  args?: TreeNode[]
  content?: TreeNode
}

const compile = (node: TreeNode): Compiled => {
  if (node.type === 'ParenthesisNode') return compile(node.content!)
  if (node.type === 'ConstantNode' && typeof node.value === 'number') {
    const value = node.value
    return () => value
  }
  if (node.type === 'SymbolNode') {
    if (node.name === 'E') return (energy) => energy
    const value = Object.hasOwn(constants, node.name!) ? constants[node.name!]! : refuse(`the name "${node.name}"`)
    return () => value
  }
  if (node.type === 'OperatorNode') return compileOperator(node)
  if (node.type === 'FunctionNode') {
    const name = typeof node.fn === 'string' ? node.fn : (node.fn?.name ?? '')
    if (!Object.hasOwn(formulaFunctions, name)) refuse(`the function "${name}"`)
    if (node.args!.length !== 1) refuse(`${node.args!.length} arguments of "${name}"`)
    const apply = formulaFunctions[name as keyof typeof formulaFunctions]
    const argument = compile(node.args![0]!)
    return (energy) => apply(argument(energy))
  }
  return refuse(`"${node.toString()}"`)
}

const compileOperator = (node: TreeNode): Compiled => {
  const [first, second] = node.args!.map(compile)
  if (node.fn === 'unaryMinus') return (energy) => -first!(energy)
  if (node.fn === 'unaryPlus') return first!
  const name = String(node.fn)
  const apply = Object.hasOwn(operators, name) ? operators[name]! : refuse(`the operator in "${node.toString()}"`)
  return (energy) => apply(first!(energy), second!(energy))
}

/** The formula as a function of E in meV. Throws a RangeError whose message says what was found and what is expected. */
export const compileFormula = (text: string): Compiled => {
  let tree: TreeNode
  try {
    tree = parse(text) as TreeNode
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error)
    throw new RangeError(`expected a formula of ${formulaLanguage}; it could not be read: ${reason}`, { cause: error })
  }
  return compile(tree)
}
