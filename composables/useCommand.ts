import { FetchError } from 'ofetch'
import { v7 } from 'uuid'
import type { ErrorCode } from '#shared/errors'

/** Why a command was not done, as the screen shows it. `code` 'unreachable': no answer came, so it is not known whether it was done. */
export interface CommandFailure {
  code: ErrorCode | 'internal' | 'unreachable'
  message: string
  /** Path of the field at fault, as the form names it. */
  field: string | null
  accepted: string | null
  /** Whatever else the server said: who and when, rows, seconds to wait. */
  data: Record<string, unknown>
}
export type CommandAnswer<T> = { ok: true, value: T } | { ok: false, failure: CommandFailure }
export interface CommandOptions { method?: 'POST' | 'PUT' | 'PATCH' | 'DELETE', body?: Record<string, unknown> | FormData | readonly unknown[] }

interface ErrorAnswer { message?: string, data?: { code?: CommandFailure['code'], field?: string, accepted?: string } & Record<string, unknown> }

/**
 * Sends a command with the CSRF token and an Idempotency-Key of its own. The key stays the same while it is not known whether the command was done (no
 * answer, or a fault on the server's side, which can fall into the moment of storing), so that pressing again cannot do it twice. A refusal is a value: `failure` holds the last one, for the form to show. When the session has ended meanwhile,
 * the sign-in page follows.
 */
export function useCommand() {
  const { $csrfFetch } = useNuxtApp()
  const session = useSessionStore()
  const route = useRoute()
  const isPending = ref(false)
  const failure = ref<CommandFailure | null>(null)
  let unanswered: { request: string, key: string } | null = null

  async function send<T>(url: string, { method = 'POST', body }: CommandOptions = {}): Promise<CommandAnswer<T>> {
    const request = `${method} ${url} ${body instanceof FormData ? formText(body) : JSON.stringify(body)}`
    const key = unanswered?.request === request ? unanswered.key : v7()
    unanswered = { request, key }
    isPending.value = true
    failure.value = null
    try {
      const value = await $csrfFetch<T>(url, { method, body: body as Record<string, unknown> | FormData | undefined, headers: { 'Idempotency-Key': key } })
      unanswered = null
      return { ok: true, value: value as T }
    }
    catch (error) {
      if (!(error instanceof FetchError)) throw error
      failure.value = readFailure(error)
      if (!MAY_HAVE_BEEN_DONE.includes(failure.value.code)) unanswered = null
      if (failure.value.code === 'notSignedIn') await leave()
      return { ok: false, failure: failure.value }
    }
    finally {
      isPending.value = false
    }
  }

  async function leave(): Promise<void> {
    session.clear()
    await navigateTo({ path: '/sign-in', query: { to: route.fullPath } })
  }

  /** What is wrong with a field and what would be accepted; null when the last command did not fail on it. */
  const errorFor = (field: string): string | null => failure.value?.field === field ? inWords(failure.value) : null
  /** A failure that belongs to none of the fields named: shown beside the button. */
  const errorBeside = (...fields: string[]): string | null => failure.value && !fields.includes(failure.value.field ?? '') ? inWords(failure.value) : null

  return { send, isPending, failure, errorFor, errorBeside, clear: () => { failure.value = null } }
}

/** What tells one form from another: of a file its name, size and time. The server compares the bytes. */
const formText = (form: FormData): string => [...form.entries()].map(([name, value]) => value instanceof File ? `${name} ${value.name} ${value.size} ${value.lastModified}` : `${name}=${value}`).join(', ')

const MAY_HAVE_BEEN_DONE: readonly CommandFailure['code'][] = ['unreachable', 'internal']

const inWords = ({ message, accepted }: CommandFailure): string => accepted ? `${message} Accepted: ${accepted}.` : message

/** What the server's answer says, or that none came. */
export function readFailure(error: FetchError): CommandFailure {
  if (error.statusCode === undefined) {
    return { code: 'unreachable', message: 'The server did not answer, so it is not known whether this was done. Try again: it will not be done twice.', field: null, accepted: null, data: {} }
  }
  const answer = (error.data ?? {}) as ErrorAnswer
  const { code, field, accepted, ...data } = answer.data ?? {}
  if (code === 'internal') return { code, message: `${answer.message ?? 'Something went wrong on our side.'} Try again: it will not be done twice.`, field: null, accepted: null, data }
  return { code: code ?? codeOf(error.statusCode), message: answer.message ?? `The server refused this (${error.statusCode}).`, field: field ?? null, accepted: accepted ?? null, data }
}

/** Answers that no route of ours made: the CSRF check above all. */
const codeOf = (status: number): CommandFailure['code'] => status === 403 ? 'notAllowed' : status === 404 ? 'notFound' : 'internal'
