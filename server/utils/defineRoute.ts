import { defineEventHandler, getHeader, getQuery, getRouterParams, readBody, readMultipartFormData, type EventHandler, type EventHandlerRequest, type H3Event } from 'h3'
import { z } from 'zod'
import { AppError } from '../../shared/errors'
import { scopeOf, type Actor, type Membership, type Permission, type Scope } from '../../shared/permissions'
import { toHttpError } from './httpErrors'
import { limitRate } from './rateLimit'

/**
 * json    a command with a JSON body (POST, PUT, PATCH, DELETE)
 * query   a read; never looks for a body, which h3 would answer with 405
 * upload  a multipart form with files
 * file    a read that answers with bytes
 * stream  a read that answers with server-sent events
 */
type Variant = 'json' | 'query' | 'upload' | 'file' | 'stream'
export interface UploadedFile { fileName: string, bytes: Uint8Array }
type Schema = z.ZodType

export interface RouteInput<P, Q, B> {
  event: H3Event
  params: P
  query: Q
  body: B
  files: UploadedFile[]
  /** Public routes run without one; every other route has been through the permission table. */
  actor: Actor
  scope: Scope
  /** The programme named in the path; '' where the path names none. */
  programmeId: string
  /** For unitOfWork: present when the browser sent an Idempotency-Key. */
  idempotency: { key: string, request: unknown } | undefined
}

interface RouteSpec<P extends Schema, Q extends Schema, B extends Schema, O extends Schema> {
  variant: Variant
  /** 'public' = no one need be signed in */
  permission: Permission | 'public'
  params?: P
  query?: Q
  body?: B
  /** Declared answer: columns it does not list never leave. Not for file and stream. */
  output?: O
  /** Largest body, bytes; refused before it is read. */
  maxBytes?: number
  run: (input: RouteInput<z.output<P>, z.output<Q>, z.output<B>>) => Promise<z.input<O>>
}

const DEFAULT_MAX_BYTES = 256 * 1024
const nothing = z.object({})

/**
 * One way through every route: session, size, membership and permission, schema, service, declared answer. Nothing can be forgotten, because
 * a route is only what it gives to this function. A programme the actor is no member of answers like one that does not exist.
 */
export function defineRoute<P extends Schema = typeof nothing, Q extends Schema = typeof nothing, B extends Schema = typeof nothing, O extends Schema = z.ZodUndefined>(
  spec: RouteSpec<P, Q, B, O>,
): EventHandler<EventHandlerRequest, Promise<z.output<O>>> {
  return defineEventHandler(async (event) => {
    try {
      const actor = requireActor(event, spec.permission)
      await limitRate(event)
      checkSize(event, spec.variant, spec.maxBytes ?? DEFAULT_MAX_BYTES)
      const { programmeId, scope } = authorise(event, actor, spec.permission)
      const params = parseOrThrow(spec.params ?? nothing, getRouterParams(event, { decode: true }))
      const query = parseOrThrow(spec.query ?? nothing, getQuery(event))
      const { body, files } = await readInput(event, spec.variant, spec.body ?? nothing)
      const idempotency = idempotencyOf(event, { params, body })
      const answer = await spec.run({ event, params, query, body, files, actor, scope, programmeId, idempotency } as RouteInput<z.output<P>, z.output<Q>, z.output<B>>)
      return spec.output ? spec.output.parse(answer) : answer as z.output<O>
    }
    catch (error) {
      throw toHttpError(error, event.context.requestId ?? 'none')
    }
  }) as EventHandler<EventHandlerRequest, Promise<z.output<O>>>
}

const NOBODY: Actor = { personId: '', sessionId: '', name: '', isAdministrator: false, memberships: [] }

function requireActor(event: H3Event, permission: Permission | 'public'): Actor {
  const actor = event.context.actor
  if (actor) return actor
  if (permission === 'public') return NOBODY
  throw new AppError('notSignedIn', 'Sign in to go on.')
}

/** Bodies without a declared length slip past every limit, so they are refused. Neither length nor encoding means no body (a plain DELETE). */
function checkSize(event: H3Event, variant: Variant, maxBytes: number): void {
  if (variant !== 'json' && variant !== 'upload') return
  const text = getHeader(event, 'content-length')
  if (text === undefined && getHeader(event, 'transfer-encoding') === undefined) return
  const length = Number(text)
  if (text === undefined || !Number.isInteger(length) || length < 0) throw new AppError('lengthRequired', 'The request must say its length.', { accepted: 'a Content-Length header' })
  if (length > maxBytes) throw new AppError('tooLarge', `The request is ${length} bytes long.`, { accepted: `at most ${maxBytes} bytes` })
}

function authorise(event: H3Event, actor: Actor, permission: Permission | 'public'): { programmeId: string, scope: Scope } {
  const code = getRouterParams(event, { decode: true }).programme
  const membership: Membership | undefined = code === undefined ? undefined : actor.memberships.find(one => one.programmeCode === code)
  if (permission === 'public') return { programmeId: membership?.programmeId ?? '', scope: 'none' }
  if (code !== undefined && !membership) throw new AppError('notFound', 'There is no such page, or it is not open to you.')
  const scope = scopeOf(actor, permission, membership?.programmeId)
  if (scope === 'none') throw new AppError('notAllowed', 'Your roles do not allow this.')
  return { programmeId: membership?.programmeId ?? '', scope }
}

async function readInput<B extends Schema>(event: H3Event, variant: Variant, schema: B): Promise<{ body: z.output<B>, files: UploadedFile[] }> {
  if (variant === 'json') return { body: parseOrThrow(schema, await readBody(event) ?? {}), files: [] }
  if (variant !== 'upload') return { body: parseOrThrow(schema, {}), files: [] }
  const parts = await readMultipartFormData(event) ?? []
  const files = parts.filter(part => part.filename !== undefined).map(part => ({ fileName: part.filename!, bytes: new Uint8Array(part.data) }))
  const fields = Object.fromEntries(parts.filter(part => part.filename === undefined && part.name).map(part => [part.name!, part.data.toString('utf8')]))
  return { body: parseOrThrow(schema, fields), files }
}

/** @throws AppError('invalidInput') with the first problem's field and, in data.issues, all of them */
export function parseOrThrow<S extends Schema>(schema: S, value: unknown): z.output<S> {
  const parsed = schema.safeParse(value)
  if (parsed.success) return parsed.data
  const issues = parsed.error.issues.map(issue => ({ field: issue.path.join('.'), message: issue.message }))
  throw new AppError('invalidInput', issues[0]!.message, { field: issues[0]!.field, data: { issues } })
}

function idempotencyOf(event: H3Event, request: unknown): { key: string, request: unknown } | undefined {
  const key = getHeader(event, 'idempotency-key')
  if (key === undefined) return undefined
  if (!/^[\w-]{8,80}$/.test(key)) throw new AppError('invalidInput', 'The Idempotency-Key header cannot be used.', { accepted: '8 to 80 letters, digits, hyphens or underscores' })
  return { key, request }
}
