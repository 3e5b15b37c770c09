import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import type { PresetsDto, SavePreset } from '../../shared/schemas/preset'
import { canonicalJson } from '../../shared/science/canonical'
import type { Deps } from '../platform/deps'
import { deletePreset, writePreset } from '../queries/presets'
import { lasting, showPresets } from './showPresets'
import { unitOfWork } from './unitOfWork'

/** Keeps conditions under a name, in the place of those that stood under it. */
export async function savePreset(deps: Deps, { actor, programmeId, preset }: { actor: Actor, programmeId: string, preset: SavePreset }): Promise<PresetsDto> {
  const kind = deps.kinds[preset.kind]
  if (!kind) throw new AppError('invalidInput', `No measurement is called ${preset.kind}.`, { field: 'kind', accepted: Object.keys(deps.kinds).join(', ') })
  const unknown = Object.keys(preset.conditions).find(key => !kind.conditions.some(spec => spec.key === key))
  if (unknown !== undefined) throw new AppError('invalidInput', `${unknown} is no condition of ${kind.title}.`, { field: `conditions.${unknown}`, accepted: kind.conditions.map(spec => spec.key).join(', ') })
  await unitOfWork(deps, { actor, name: 'savePreset', programmeId }, async (work) => {
    await writePreset(work.trx, { id: work.id(), programmeId, name: preset.name, kind: preset.kind, conditions: canonicalJson(lasting(preset.conditions)), personId: actor.personId, at: work.now })
    return { result: null, subject: `preset ${preset.name}`, payload: { kind: preset.kind, conditions: lasting(preset.conditions) } }
  })
  return showPresets(deps, { programmeId, kind: preset.kind })
}

export async function removePreset(deps: Deps, { actor, programmeId, id }: { actor: Actor, programmeId: string, id: string }): Promise<{ done: true }> {
  return unitOfWork(deps, { actor, name: 'removePreset', programmeId }, async (work) => {
    if (!await deletePreset(work.trx, programmeId, id)) throw new AppError('notFound', 'There is no such preset in this programme.')
    return { result: { done: true }, subject: `preset ${id}`, payload: {} }
  })
}
