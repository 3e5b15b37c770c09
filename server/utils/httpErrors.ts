import { createError, H3Error } from 'h3'
import { AppError, ERROR_STATUS, type ErrorCode } from '../../shared/errors'

/** Status texts as HTTP has them; without one Nitro labels every error "Server Error". */
const STATUS_TEXT: Record<number, string> = {
  401: 'Unauthorized', 403: 'Forbidden', 404: 'Not Found', 409: 'Conflict', 410: 'Gone', 411: 'Length Required', 413: 'Content Too Large',
  415: 'Unsupported Media Type', 422: 'Unprocessable Content', 429: 'Too Many Requests', 500: 'Internal Server Error', 503: 'Service Unavailable',
}

export interface ErrorBody { code: ErrorCode | 'internal', field?: string, accepted?: string, requestId?: string, [more: string]: unknown }

/**
 * The only place where errors become HTTP. What a person can act on keeps its words; anything else is logged with an id and shown as one neutral
 * sentence with that id, so that nothing of the inside leaks.
 */
export function toHttpError(error: unknown, requestId: string): H3Error {
  if (error instanceof AppError) {
    const statusCode = ERROR_STATUS[error.code]
    const { field, accepted, data } = error.details
    return httpError(statusCode, error.message, { ...data, code: error.code, ...(field ? { field } : {}), ...(accepted ? { accepted } : {}) })
  }
  if (error instanceof H3Error && error.statusCode < 500) return error
  console.error(JSON.stringify({ at: new Date().toISOString(), requestId, error: error instanceof Error ? error.stack ?? error.message : String(error) }))
  return httpError(500, `Something went wrong on our side. It is in the log under the reference ${requestId}.`, { code: 'internal', requestId })
}

function httpError(statusCode: number, message: string, data: ErrorBody): H3Error {
  return createError({ statusCode, statusMessage: STATUS_TEXT[statusCode] ?? 'Error', message, data })
}
