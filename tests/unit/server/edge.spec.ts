import { Readable } from 'node:stream'
import type { H3Event } from 'h3'
import { describe, expect, it } from 'vitest'
import { AppError } from '../../../shared/errors/app-error'
import { assertFiniteNumbers, toAnswerJson } from '../../../server/utils/answer'
import { clientAddressOf } from '../../../server/utils/client-address'
import { findUnstorableText, parseBody, readLimited } from '../../../server/utils/read-body'
import { ownOrigins, requireSameOrigin } from '../../../server/utils/same-origin'

const codeOf = (work: () => unknown): string => {
  try {
    work()
  } catch (error) {
    return error instanceof AppError ? error.code : `not ours: ${String(error)}`
  }
  return 'accepted'
}

describe('same origin', () => {
  it.each([
    [{ 'sec-fetch-site': 'same-origin' }, 'accepted'],
    [{ 'sec-fetch-site': 'same-origin', origin: 'https://elsewhere.example' }, 'accepted'],
    [{ 'sec-fetch-site': 'same-site' }, 'request/cross-site'],
    [{ 'sec-fetch-site': 'none' }, 'request/cross-site'],
    [{ 'sec-fetch-site': 'cross-site', origin: 'https://lw.example' }, 'request/cross-site'],
    [{ origin: 'https://lw.example' }, 'accepted'],
    [{ origin: 'https://lw.example:443' }, 'request/cross-site'],
    [{ origin: 'https://lw.example.evil.example' }, 'request/cross-site'],
    [{ origin: 'null' }, 'request/cross-site'],
    [{ host: 'lw.example' }, 'request/cross-site'],
    [{}, 'request/cross-site'],
  ])('%j is %s', (headers, expected) => {
    expect(codeOf(() => requireSameOrigin(headers as Record<string, string>, 'https://lw.example'))).toBe(expected)
  })

  it('knows the names of the own machine, with the configured port only', () => {
    expect(ownOrigins('http://127.0.0.1:3000')).toEqual([
      'http://127.0.0.1:3000',
      'http://localhost:3000',
      'http://[::1]:3000',
    ])
    expect(ownOrigins('https://lw.example/')).toEqual(['https://lw.example'])
  })
})

describe('client address', () => {
  const forwarded = { 'x-forwarded-for': '1.2.3.4, 203.0.113.9, 198.51.100.7' }
  it.each([
    ['the socket when no proxy is named', '::ffff:192.0.2.1', forwarded, 0, '192.0.2.1'],
    ['the entry of the only proxy', '10.0.0.1', forwarded, 1, '198.51.100.7'],
    ['the entry of the outer of two proxies', '10.0.0.1', forwarded, 2, '203.0.113.9'],
    ['the socket when a proxy wrote nothing', '10.0.0.1', {}, 1, '10.0.0.1'],
    ['the socket when the entry is no address', '10.0.0.1', { 'x-forwarded-for': 'unknown' }, 1, '10.0.0.1'],
    [
      'the socket when there are fewer entries than proxies',
      '10.0.0.1',
      { 'x-forwarded-for': '1.2.3.4' },
      2,
      '10.0.0.1',
    ],
    ['the network of an IPv6 address', '2001:db8:1:2:3:4:5:6', {}, 0, '2001:db8:1:2::/64'],
    ['the network of a short IPv6 address', '2001:DB8::1', {}, 0, '2001:db8:0:0::/64'],
    ['the network of loopback', '::1', {}, 0, '0:0:0:0::/64'],
    ['the network of an address with a zone', 'fe80::1%eth0', {}, 0, 'fe80:0:0:0::/64'],
    ['a word when the socket has none', undefined, {}, 0, 'unknown'],
  ])('is %s', (_what, socket, headers, proxies, expected) => {
    expect(clientAddressOf(socket, headers, proxies)).toBe(expected)
  })
})

describe('body', () => {
  const eventOf = (chunks: Buffer[], headers: Record<string, string> = {}): H3Event =>
    ({ node: { req: Object.assign(Readable.from(chunks), { headers }) } }) as unknown as H3Event

  it('is read up to exactly the limit', async () => {
    expect((await readLimited(eventOf([Buffer.alloc(6), Buffer.alloc(4)]), 10)).length).toBe(10)
    await expect(readLimited(eventOf([Buffer.alloc(6), Buffer.alloc(5)]), 10)).rejects.toThrow('at most 10 bytes')
    await expect(readLimited(eventOf([], { 'content-length': '11' }), 10)).rejects.toThrow('at most 10 bytes')
  })

  it('that breaks off is no body', async () => {
    const request = new Readable({ read: () => undefined })
    const event = { node: { req: Object.assign(request, { headers: {} }) } } as unknown as H3Event
    const reading = readLimited(event, 10)
    request.push('half')
    request.destroy()
    await expect(reading).rejects.toThrow('ended before its body did')
  })

  it('never reaches the prototype of anything', () => {
    for (const text of ['{"__proto__":{"a":1}}', '[{"x":{"__proto__":1}}]', '{"constructor":{"prototype":{"a":1}}}']) {
      expect(codeOf(() => parseBody(Buffer.from(text)))).toBe('input/malformed')
    }
    expect(parseBody(Buffer.from('{"constructor":"Bridgman"}'))).toEqual({ constructor: 'Bridgman' })
    expect(({} as { a?: number }).a).toBeUndefined()
  })

  it('tells where a text stands that PostgreSQL cannot store', () => {
    const body = { name: 'fine', list: ['\0', { deep: 'a\ud800' }], password: 'a\0b', 'ke\0y': 1 }
    expect(findUnstorableText(body, ['password']).map(({ path }) => path)).toEqual([
      ['list', 0],
      ['list', 1, 'deep'],
      ['ke\0y'],
    ])
    expect(findUnstorableText({ flag: '🏴‍☠️', text: 'ħω_c' }, [])).toEqual([])
  })
})

describe('answer', () => {
  it('holds finite numbers or none', () => {
    expect(toAnswerJson({ values: [1, -0, 5e-324], at: new Date(0), gone: undefined })).toBe(
      '{"values":[1,0,5e-324],"at":"1970-01-01T00:00:00.000Z"}',
    )
    for (const value of [Number.NaN, Number.POSITIVE_INFINITY, [1, [Number.NaN]], { a: { b: [0, -Infinity] } }]) {
      expect(() => toAnswerJson(value)).toThrow(RangeError)
    }
  })

  it('names the place of a number that is not finite', () => {
    expect(() => assertFiniteNumbers({ curves: [{ y: [0, Number.NaN] }] })).toThrow('answer.curves[0].y[1]')
  })

  it('is checked fast enough not to hold others up', () => {
    const values = Array.from({ length: 1_000_000 }, (_x, index) => index / 7)
    const started = performance.now()
    assertFiniteNumbers({ values })
    // Ten times the figure: a hang guard, not a measurement.
    expect(performance.now() - started).toBeLessThan(500)
  })
})
