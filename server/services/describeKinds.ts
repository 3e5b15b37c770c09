import { AppError } from '../../shared/errors'
import type { MeasurementKind } from '../../shared/measurements/types'
import type { KindDto } from '../../shared/schemas/preset'
import { toShown } from '../../shared/measurements/shownCondition'
import type { Deps } from '../platform/deps'

/** Every measurement kind as its forms and menus need it, in the order of the registry. */
export async function describeKinds({ kinds }: Pick<Deps, 'kinds'>): Promise<{ kinds: KindDto[] }> {
  return { kinds: Object.values(kinds).map(kindDto) }
}

/** Text of a template file. @throws AppError('notFound') */
export async function readTemplate({ kinds }: Pick<Deps, 'kinds'>, { kind, name }: { kind: string, name: string }): Promise<string> {
  const template = kinds[kind]?.templates.find(one => one.fileName === name)
  if (!template) throw new AppError('notFound', 'There is no such template.')
  return template.text
}

function kindDto(kind: MeasurementKind): KindDto {
  return {
    kind: kind.kind, title: kind.title, purpose: kind.purpose, layouts: [...kind.layouts], templates: kind.templates.map(template => template.fileName),
    models: kind.models.map(({ id, title }) => ({ id, title })), columns: kind.columns.map(({ stem, label, dimension, required, help }) => ({ stem, label, dimension, required, help })),
    conditions: kind.conditions.map(spec => ({
      key: spec.key, label: spec.label, type: spec.type, unit: spec.shownUnit ?? null, required: spec.required, help: spec.help,
      choices: (spec.choices ?? []).map(({ value, label }) => ({ value, label })), dimension: spec.dimension ?? null, min: spec.min === undefined ? null : toShown(spec, spec.min), max: spec.max === undefined ? null : toShown(spec, spec.max),
      when: spec.when ? { key: spec.when.key, is: [...spec.when.is] } : null,
    })),
  }
}
