import type { UploadDraft } from '../../shared/measurements/draft'
import type { Understood } from '../../shared/measurements/tabular/understood'
import type { MeasurementKind } from '../../shared/measurements/types'
import type { Actor } from '../../shared/permissions'
import type { PreviewDto } from '../../shared/schemas/upload'
import type { Deps } from '../platform/deps'
import { saveDraft } from '../queries/uploads'
import { type UploadTarget, uploadTargets } from '../queries/uploadTargets'
import { quickLook } from './quickLook'
import { stagedDto } from './showUpload'
import { kindOf, ownStaged, readUpload, refuseUnlessStaged, stagedBytes } from './uploadReading'

export interface PreviewInput { actor: Actor, programmeId: string, id: string, draft: UploadDraft }

/** How the file is read under these choices, with every problem. The choices are kept with the staged upload; nothing else is stored. */
export async function previewUpload(deps: Deps, { actor, programmeId, id, draft }: PreviewInput): Promise<PreviewDto> {
  const staged = await ownStaged(deps, { programmeId, personId: actor.personId, id })
  refuseUnlessStaged(staged, deps.clock.now())
  const bytes = await stagedBytes(deps, staged)
  const kind = kindOf(deps, draft, bytes)
  const targets = await uploadTargets(deps.db, programmeId)
  const understood = await readUpload(deps, bytes, { programmeId, kind, draft, targets })
  const text = JSON.stringify(draft)
  if (text !== staged.draft && !await saveDraft(deps.db, id, text)) refuseUnlessStaged(await ownStaged(deps, { programmeId, personId: actor.personId, id }), deps.clock.now())
  return { ...previewDto(understood, kind), upload: await stagedDto(deps, { ...staged, draft: text }), targets: byAgent(targets) }
}

function previewDto(understood: Understood, kind: MeasurementKind): Omit<PreviewDto, 'upload' | 'targets'> {
  const { tubes, series, ...rest } = understood
  return {
    ...rest,
    kind: kind.kind,
    tubes: tubes.map(({ points, ...tube }) => ({ ...tube, points: points.rows.length })),
    series: series.map(part => ({ complexCode: part.complexCode, lot: part.lot, tubes: part.tubes.length, title: kind.describe(understood.conditions) })),
    quickLook: quickLook(understood, kind),
  }
}

function byAgent(targets: readonly UploadTarget[]): PreviewDto['targets'] {
  const agents = new Map<string, string[]>()
  for (const { complexCode, lot } of targets) agents.set(complexCode, [...agents.get(complexCode) ?? [], lot])
  return [...agents].map(([complexCode, lots]) => ({ complexCode, lots }))
}
