import type { JobKind } from './define'
import { fitRun } from './fitRun'
import { groundNotice } from './groundNotice'
import { sendMail } from './sendMail'
import { sendResetLink } from './sendResetLink'
import { sweepUploads } from './sweepUploads'

/** Registry of job kinds: a new one is a file in this folder and a line here. */
const KINDS: readonly JobKind[] = [sendMail as JobKind, sendResetLink as JobKind, fitRun as JobKind, groundNotice as JobKind, sweepUploads as JobKind]

export const JOBS: Readonly<Record<string, JobKind>> = Object.fromEntries(KINDS.map(one => [one.kind, one]))
