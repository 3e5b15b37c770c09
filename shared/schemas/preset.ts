import { z } from 'zod'

const conditions = z.record(z.string().max(60), z.union([z.number(), z.string().max(500), z.null()]))

export const PresetQuery = z.object({ kind: z.string().max(60) })
export const PresetParams = z.object({ programme: z.string(), id: z.uuid() })
export const SavePreset = z.strictObject({ name: z.string().trim().min(1, 'Name the preset.').max(120, 'A name has at most 120 characters.'), kind: z.string().max(60), conditions })
export type SavePreset = z.output<typeof SavePreset>

/** What a form of conditions can start from. */
export const PresetsDto = z.object({
  presets: z.array(z.object({ id: z.string(), name: z.string(), conditions, savedBy: z.string(), savedAt: z.string() })),
  instruments: z.array(z.object({ name: z.string(), b0_T: z.number() })),
  last: z.object({ seriesId: z.string(), title: z.string(), conditions, at: z.string() }).nullable(),
})
export type PresetsDto = z.output<typeof PresetsDto>

const ConditionSpecDto = z.object({
  key: z.string(), label: z.string(), type: z.enum(['number', 'choice', 'text', 'date']), unit: z.string().nullable(), required: z.boolean(), help: z.string(),
  choices: z.array(z.object({ value: z.string(), label: z.string() })),
  /** In the shown unit, as are the values that the form takes; the form's own converter makes stored ones of them. */
  dimension: z.string().nullable(), min: z.number().nullable(), max: z.number().nullable(),
  when: z.object({ key: z.string(), is: z.array(z.string()) }).nullable(),
})
export type ConditionSpecDto = z.output<typeof ConditionSpecDto>

/** Everything a screen needs to know of a measurement kind; nothing on a screen asks which kind it is. */
export const KindDto = z.object({
  kind: z.string(), title: z.string(), purpose: z.string(),
  columns: z.array(z.object({ stem: z.string(), label: z.string(), dimension: z.string(), required: z.boolean(), help: z.string() })),
  conditions: z.array(ConditionSpecDto),
  layouts: z.array(z.enum(['long', 'columnPerTube', 'rowPerTube'])),
  templates: z.array(z.string()),
  models: z.array(z.object({ id: z.string(), title: z.string() })),
})
export type KindDto = z.output<typeof KindDto>
export const KindsDto = z.object({ kinds: z.array(KindDto) })
