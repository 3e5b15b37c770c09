import { defineStore } from 'pinia'
import type { UploadDraft } from '#shared/measurements/draft'
import type { Conditions } from '#shared/measurements/types'
import type { KindDto, PresetsDto } from '#shared/schemas/preset'
import type { ConfirmedDto, PreviewDto, StagedUploadDto } from '#shared/schemas/upload'

const PAUSE_MS = 300
const NO_PRESETS: PresetsDto = { presets: [], instruments: [], last: null }

/** One upload between the file and the store: what the server makes of it under the choices made so far. Nothing is decided here; every change is read anew there. */
export const useUploadStore = defineStore('upload', () => {
  const session = useSessionStore()
  const reading = useCommand()
  const storing = useCommand()
  const kinds = shallowRef<readonly KindDto[]>([])
  const presets = shallowRef<PresetsDto>(NO_PRESETS)
  const preview = shallowRef<PreviewDto | null>(null)
  const draft = shallowRef<UploadDraft>({})
  let asked = 0
  let timer: ReturnType<typeof setTimeout> | undefined
  const base = computed(() => `/api/programmes/${session.programmeCode}`)
  const kind = computed(() => kinds.value.find(one => one.kind === (preview.value?.kind ?? draft.value.kind)) ?? null)
  const blocking = computed(() => preview.value?.problems.filter(problem => problem.severity === 'blocks').length ?? 0)
  const questions = computed(() => (preview.value?.problems.length ?? 0) - blocking.value)

  async function begin(): Promise<void> {
    if (kinds.value.length === 0) kinds.value = (await $fetch<{ kinds: KindDto[] }>(`${base.value}/kinds`)).kinds
  }
  /** @returns the id of the staged upload; null where it was refused, with `reading.failure` saying why */
  async function stage(file: File): Promise<string | null> {
    const form = new FormData()
    form.append('file', file)
    const answer = await reading.send<StagedUploadDto>(`${base.value}/uploads`, { body: form })
    return answer.ok ? answer.value.id : null
  }
  /** Takes up a staged upload where its owner left it. */
  async function open(id: string): Promise<void> {
    const staged = await $fetch<StagedUploadDto>(`${base.value}/uploads/${id}`)
    draft.value = staged.draft
    await read(id)
  }
  async function read(id: string): Promise<void> {
    const mine = ++asked
    const kindBefore = preview.value?.kind
    const answer = await reading.send<PreviewDto>(`${base.value}/uploads/${id}/preview`, { body: { draft: draft.value } })
    // A later change was asked meanwhile: its answer is the one that counts.
    if (!answer.ok || mine !== asked) return
    preview.value = answer.value
    // What the file was taken for stays, until the person says otherwise.
    draft.value = { ...draft.value, kind: answer.value.kind }
    if (answer.value.kind !== kindBefore) presets.value = await $fetch<PresetsDto>(`${base.value}/presets`, { query: { kind: answer.value.kind } })
  }
  /** Changes choices and reads the file anew after a moment; what is typed is not cut into one request per key. */
  function change(patch: Partial<UploadDraft>): void {
    draft.value = { ...draft.value, ...patch }
    const id = preview.value?.upload.id
    clearTimeout(timer)
    if (id) timer = setTimeout(() => void read(id), PAUSE_MS)
  }
  const changeCondition = (key: string, value: number | string | null): void => change({ conditions: { ...draft.value.conditions, [key]: value } })

  /** Fills in what neither the file nor the person has said yet. */
  function fillFrom(conditions: Conditions): void {
    const known = new Set([...preview.value?.found.map(found => found.key) ?? [], ...Object.entries(draft.value.conditions ?? {}).flatMap(([key, value]) => value === null || value === '' ? [] : [key])])
    change({ conditions: { ...draft.value.conditions, ...Object.fromEntries(Object.entries(conditions).filter(([key]) => !known.has(key))) } })
  }
  async function savePreset(name: string): Promise<boolean> {
    if (!preview.value) return false
    const answer = await storing.send<PresetsDto>(`${base.value}/presets`, { body: { name, kind: preview.value.kind, conditions: preview.value.conditions } })
    if (answer.ok) presets.value = answer.value
    return answer.ok
  }
  async function confirm(): Promise<ConfirmedDto | null> {
    const id = preview.value?.upload.id
    clearTimeout(timer)
    if (!id) return null
    const answer = await storing.send<ConfirmedDto>(`${base.value}/uploads/${id}/confirm`, { body: { draft: draft.value } })
    if (!answer.ok) await read(id)
    return answer.ok ? answer.value : null
  }
  async function discard(): Promise<boolean> {
    const id = preview.value?.upload.id
    return id !== undefined && (await storing.send(`${base.value}/uploads/${id}`, { method: 'DELETE' })).ok
  }
  function clear(): void {
    clearTimeout(timer)
    asked += 1
    preview.value = null
    draft.value = {}
    presets.value = NO_PRESETS
    reading.clear()
    storing.clear()
  }

  return {
    kinds, kind, presets, preview, draft, blocking, questions, isReading: reading.isPending, isStoring: storing.isPending, readFailure: reading.failure, storeFailure: storing.failure,
    begin, stage, open, change, changeCondition, fillFrom, savePreset, confirm, discard, clear,
  }
})
