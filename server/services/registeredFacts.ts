import type { UploadDraft } from '../../shared/measurements/draft'
import type { Understood } from '../../shared/measurements/tabular/understood'
import type { MeasurementKind, UploadProblem } from '../../shared/measurements/types'
import type { Deps } from '../platform/deps'
import { findComplex } from '../queries/complexes'
import { recordContext } from './enterRecord'

export interface Registered { draft: UploadDraft, found: Understood['found'], problems: UploadProblem[] }

/**
 * What the registry says of the agent of an upload, for a kind that asks it: conditions that neither file nor person gives are filled in, and what contradicts it
 * is told. An upload of several agents is left as it is: its conditions stand for all of them.
 */
export async function withRegistered({ db }: Pick<Deps, 'db'>, { series, conditions }: Understood, { programmeId, kind, draft }: { programmeId: string, kind: MeasurementKind, draft: UploadDraft }): Promise<Registered> {
  const [code, ...more] = new Set(series.map(part => part.complexCode))
  const complex = kind.registered === undefined || code === undefined || code === null || more.length > 0 ? null : await findComplex(db, programmeId, { code })
  if (!complex || !kind.registered) return { draft, found: [], problems: [] }
  const { conditions: told, problems } = kind.registered(await recordContext(db, programmeId, complex), conditions)
  const open = Object.entries(told).flatMap(([key, value]) => value === null || (conditions[key] ?? null) !== null || Object.hasOwn(draft.conditions ?? {}, key) ? [] : [[key, value] as const])
  return {
    draft: open.length === 0 ? draft : { ...draft, conditions: { ...draft.conditions, ...Object.fromEntries(open) } },
    found: open.map(([key, value]) => ({ key, value, place: `the registry, ${complex.code}`, text: String(value) })), problems,
  }
}
