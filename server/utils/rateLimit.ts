import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible'
import type { H3Event } from 'h3'
import { AppError } from '../../shared/errors'

/** Requests a minute per person, or per socket address when nobody is signed in. Never X-Forwarded-For, which anybody can write. */
const REQUESTS_PER_MINUTE = Number(process.env.LANTHORN_REQUESTS_PER_MINUTE ?? 1200)
const limiter = new RateLimiterMemory({ points: REQUESTS_PER_MINUTE, duration: 60 })

/** @throws AppError('tooManyRequests') with the seconds to wait */
export async function limitRate(event: H3Event): Promise<void> {
  const key = event.context.actor?.personId ?? sourceOf(event)
  try {
    await limiter.consume(key)
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
