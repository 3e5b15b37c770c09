import { acidHalfLife } from './acidHalfLife'
import { challenge } from './challenge'
import type { RecordKind } from './define'
import { formation } from './formation'
import { rateLaw } from './rateLaw'
import { thermo } from './thermo'
import { zincPhosphate } from './zincPhosphate'

/** Registered kinds of typed records, in the order they are offered. */
export const RECORD_KINDS: Readonly<Record<string, RecordKind>> = Object.fromEntries([thermo, rateLaw, acidHalfLife, zincPhosphate, challenge, formation].map(kind => [kind.kind, kind]))

export const recordKind = (kind: string): RecordKind | null => (Object.hasOwn(RECORD_KINDS, kind) ? RECORD_KINDS[kind] ?? null : null)
