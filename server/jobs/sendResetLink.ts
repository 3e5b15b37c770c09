import { z } from 'zod'
import { sendResetLink as makeAndSend } from '../services/sendResetLink'
import { defineJob } from './define'

/** Looks up who asked for a new password and mails the link, away from the request, whose time must not tell who has an account. */
export const sendResetLink = defineJob({
  kind: 'account.resetLink',
  payload: z.object({ email: z.string() }),
  limitSeconds: 60,
  run: (deps, { job, payload }) => makeAndSend(deps, { email: payload.email, job }),
})
