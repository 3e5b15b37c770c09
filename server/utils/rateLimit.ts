import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible'
import type { H3Event } from 'h3'
import { AppError } from '../../shared/errors'

/** Requests a minute per person, or per socket address when nobody is signed in. Never X-Forwarded-For, which anybody can write. */
const REQUESTS_PER_MINUTE = Number(process.env.LANTHORN_REQUESTS_PER_MINUTE ?? 1200)
const limiter = new RateLimiterMemory({ points: REQUESTS_PER_MINUTE, duration: 60 })

/** Tries an hour per socket address on what costs us a mail or a password hash and needs nobody signed in. */
const DOOR_TRIES_PER_HOUR = Number(process.env.LANTHORN_DOOR_TRIES_PER_HOUR ?? 60)
const doorLimiter = new RateLimiterMemory({ points: DOOR_TRIES_PER_HOUR, duration: 3600 })

/** @throws AppError('tooManyRequests') with the seconds to wait */
export function limitRate(event: H3Event): Promise<void> {
  return consume(limiter, event.context.actor?.personId ?? sourceOf(event))
}

/** For links and forms before the door: asking for a reset, using a token. @throws AppError('tooManyRequests') */
export function limitSource(event: H3Event): Promise<void> {
  return consume(doorLimiter, sourceOf(event))
}

async function consume(from: RateLimiterMemory, key: string): Promise<void> {
  try {
    await from.consume(key)
  }
  catch (refusal) {
    if (!(refusal instanceof RateLimiterRes)) throw refusal
    const seconds = Math.ceil(refusal.msBeforeNext / 1000)
    throw new AppError('tooManyRequests', `Too many requests; try again in ${seconds} s.`, { data: { retryAfter_s: seconds } })
  }
}

/** Address of the socket, not of a header. */
export function sourceOf(event: H3Event): string {
  return event.node.req.socket.remoteAddress ?? 'unknown'
}
