import type { JobKind } from './define'
import { sendMail } from './sendMail'

/** Registry of job kinds: a new one is a file in this folder and a line here. */
const KINDS: readonly JobKind[] = [sendMail as JobKind]

export const JOBS: Readonly<Record<string, JobKind>> = Object.fromEntries(KINDS.map(one => [one.kind, one]))
