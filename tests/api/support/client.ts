import { request as httpRequest } from 'node:http'
import { inject } from 'vitest'

export interface Answer {
  status: number
  headers: Headers
  text: string
  bytes: Buffer
  // The shape differs from route to route; specs assert it.
  // eslint-disable-next-line @typescript-eslint/no-explicit-any
  json: any
}

export interface Sent {
  method?: string
  json?: unknown
  /** Raw body; `contentType` says what it claims to be. */
  body?: string | Buffer
  contentType?: string
  /** Replaces the headers a page of ours would send (Sec-Fetch-Site). */
  headers?: Record<string, string>
}

/** Loopback is a whole network: every client has an address of its own, so that they are not counted as one. */
const randomLoopback = (): string => `127.${[1, 2, 3].map(() => 1 + Math.floor(Math.random() * 250)).join('.')}`

const parse = (text: string, type: string): unknown => (/json/.test(type) && text ? JSON.parse(text) : undefined)

/**
 * A browser as the server sees it: keeps cookies, says that its requests come from our own page. Speaks plain
 * node:http, because fetch would mend paths and headers that the tests want to be wrong.
 */
export class Client {
  readonly cookies = new Map<string, string>()
  /** Every Set-Cookie line that this client ever got. */
  readonly received: string[] = []

  constructor(
    readonly baseUrl: string = inject('baseUrl'),
    readonly address: string = randomLoopback(),
  ) {}

  /** The same cookies in another browser: a copied session. */
  copy(baseUrl: string = this.baseUrl): Client {
    const copy = new Client(baseUrl, this.address)
    for (const [name, value] of this.cookies) copy.cookies.set(name, value)
    return copy
  }

  get = (path: string, sent: Sent = {}) => this.send(path, { ...sent, method: 'GET' })
  post = (path: string, json: unknown = {}, sent: Sent = {}) => this.send(path, { json, ...sent, method: 'POST' })
  put = (path: string, json: unknown, sent: Sent = {}) => this.send(path, { json, ...sent, method: 'PUT' })
  patch = (path: string, json: unknown, sent: Sent = {}) => this.send(path, { json, ...sent, method: 'PATCH' })
  remove = (path: string, sent: Sent = {}) => this.send(path, { ...sent, method: 'DELETE' })

  send(path: string, sent: Sent): Promise<Answer> {
    const body = sent.body ?? (sent.json === undefined ? undefined : JSON.stringify(sent.json))
    const type = sent.contentType ?? (sent.json === undefined ? undefined : 'application/json')
    const cookie = [...this.cookies].map(([name, value]) => `${name}=${value}`).join('; ')
    const headers: Record<string, string> = {
      ...(sent.headers ?? { 'sec-fetch-site': 'same-origin' }),
      ...(cookie ? { cookie } : {}),
      ...(type ? { 'content-type': type } : {}),
      ...(body === undefined ? {} : { 'content-length': String(Buffer.byteLength(body)) }),
    }
    const { hostname, port } = new URL(this.baseUrl)
    return new Promise((done, fail) => {
      const method = sent.method ?? 'GET'
      const request = httpRequest({ hostname, port, path, method, headers, agent: false, localAddress: this.address })
      request.once('error', fail)
      request.once('response', (response) => {
        const chunks: Buffer[] = []
        response.on('data', (chunk: Buffer) => chunks.push(chunk))
        response.once('error', fail)
        response.once('end', () => {
          const bytes = Buffer.concat(chunks)
          const text = bytes.toString('utf8')
          const answer = new Headers()
          for (const [name, value] of Object.entries(response.headers)) answer.set(name, String(value))
          this.keepCookies(response.headers['set-cookie'] ?? [])
          const json = parse(text, answer.get('content-type') ?? '')
          done({ status: response.statusCode ?? 0, headers: answer, text, bytes, json })
        })
      })
      request.end(body)
    })
  }

  private keepCookies(lines: string[]): void {
    this.received.push(...lines)
    for (const line of lines) {
      const [pair = ''] = line.split(';', 1)
      const at = pair.indexOf('=')
      const [name, value] = [pair.slice(0, at), pair.slice(at + 1)]
      if (value === '' || /max-age=0/i.test(line)) this.cookies.delete(name)
      else this.cookies.set(name, value)
    }
  }
}
