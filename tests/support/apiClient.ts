import { inject } from 'vitest'

export interface ApiAnswer { status: number, headers: Headers, body: unknown, text: string }
export interface Sent { method?: string, body?: unknown, headers?: Record<string, string>, withoutToken?: boolean }

/** A browser's share of the talk with the server: keeps cookies, and sends the CSRF token of the page it loaded. */
export class ApiClient {
  readonly cookies = new Map<string, string>()
  token = ''
  readonly origin: string

  constructor(origin: string = inject('baseURL')) {
    this.origin = origin
  }

  /** Loads the sign-in page, which hands out cookie and token of the CSRF check. */
  async open(): Promise<this> {
    const page = await this.send('/sign-in')
    this.token = /<meta name="csrf-token" content="([^"]+)"/.exec(page.text)?.[1] ?? ''
    if (!this.token) throw new Error(`The sign-in page carries no CSRF token (${page.status}).`)
    return this
  }

  async signIn(email: string, password: string): Promise<ApiAnswer> {
    return this.send('/api/session', { method: 'POST', body: { email, password } })
  }

  async send(path: string, { method = 'GET', body, headers = {}, withoutToken = false }: Sent = {}): Promise<ApiAnswer> {
    const stop = new AbortController()
    const response = await fetch(`${this.origin}${path}`, {
      method, redirect: 'manual', signal: stop.signal, ...(body === undefined ? {} : { body: body instanceof FormData ? body : JSON.stringify(body) }),
      headers: {
        ...(body === undefined || body instanceof FormData ? {} : { 'content-type': 'application/json' }), ...(this.cookies.size > 0 ? { cookie: [...this.cookies].map(([name, value]) => `${name}=${value}`).join('; ') } : {}),
        ...(withoutToken ? {} : { 'csrf-token': this.token }), ...headers,
      },
    })
    for (const line of response.headers.getSetCookie()) {
      const [pair = ''] = line.split(';')
      this.cookies.set(pair.slice(0, pair.indexOf('=')), pair.slice(pair.indexOf('=') + 1))
    }
    // A stream has no end to wait for: its status is all a test of routes wants.
    if (response.headers.get('content-type')?.startsWith('text/event-stream')) {
      stop.abort()
      return { status: response.status, headers: response.headers, body: null, text: '' }
    }
    const text = await response.text()
    const isJson = response.headers.get('content-type')?.includes('json') ?? false
    return { status: response.status, headers: response.headers, body: isJson && text !== '' ? JSON.parse(text) as unknown : null, text }
  }
}
