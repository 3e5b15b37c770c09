import type { Deps } from '../platform/deps'
import { hex, sha256 } from '../platform/hashes'
import { unitOfWork } from './unitOfWork'

const BUCKET_ms = 5 * 60_000

/**
 * Takes a wish for a reset link. Whether the address has an account is looked up later, by the worker, so that answer and time tell nothing;
 * one address gets at most one link in five minutes.
 */
export async function askReset(deps: Deps, { email, source }: { email: string, source: string }): Promise<{ done: true }> {
  return unitOfWork(deps, { actor: null, name: 'askReset', programmeId: null }, async ({ enqueue, now }) => {
    const address = hex(sha256(email)).slice(0, 32)
    await enqueue({ kind: 'account.resetLink', dedupeKey: `resetLink:${address}:${Math.floor(now.getTime() / BUCKET_ms)}`, payload: { email }, maxAttempts: 5 })
    return { result: { done: true as const }, subject: 'password reset', payload: { source } }
  })
}
