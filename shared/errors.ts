/** Everything a person can be told to act on. One code, one HTTP status; nothing else maps errors to statuses. */
export const ERROR_STATUS = {
  invalidInput: 422,
  notSignedIn: 401,
  wrongCredentials: 401,
  lockedOut: 429,
  tooManyRequests: 429,
  notAllowed: 403,
  notFound: 404,
  conflict: 409,
  expired: 410,
  lengthRequired: 411,
  tooLarge: 413,
  unsupported: 415,
  unavailable: 503,
} as const

export type ErrorCode = keyof typeof ERROR_STATUS

export interface ErrorDetails {
  /** Path of the field at fault, as the form names it. */
  field?: string
  /** What would be accepted instead, in words. */
  accepted?: string
  /** Anything the screen needs to help: who signed and when, rows and columns, seconds to wait. */
  data?: Record<string, unknown>
}

/**
 * A refusal that a person can act on: what is wrong (message) and what would be accepted (details).
 * Bugs and outages are not AppErrors; they are logged with an id and shown as one neutral sentence.
 */
export class AppError extends Error {
  readonly code: ErrorCode
  readonly details: ErrorDetails

  constructor(code: ErrorCode, message: string, details: ErrorDetails = {}) {
    super(message)
    this.name = 'AppError'
    this.code = code
    this.details = details
  }
}
