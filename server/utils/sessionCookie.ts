import type { H3Event } from 'h3'

/** The sealed cookie after a sign-in: a new one each time, holding the session's id and nothing else. */
export async function giveSession(event: H3Event, sessionId: string): Promise<void> {
  await replaceUserSession(event, { secure: { sessionId } })
}

export async function takeSession(event: H3Event): Promise<void> {
  await clearUserSession(event)
}
