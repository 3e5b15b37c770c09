import type { Conditions } from '../../shared/measurements/types'
import type { Deps } from '../platform/deps'
import type { CheckSubject } from '../queries/checkSubjects'
import { RECORD_KINDS } from '../../shared/evidence/records/index'

/** A subject in words, whatever registry it comes from: a measurement kind, a record kind, or a batch. */
export function describeSubject({ kinds }: Pick<Deps, 'kinds'>, subject: CheckSubject): { title: string, description: string } {
  const conditions = JSON.parse(subject.conditions) as Conditions
  if (subject.kind === 'fit') {
    const kind = kinds[subject.what]
    return { title: subject.title, description: kind ? kind.describe(conditions) : subject.what }
  }
  if (subject.kind === 'record') {
    const kind = RECORD_KINDS[subject.what]
    return { title: kind?.title ?? subject.what, description: kind?.describe(conditions) ?? '' }
  }
  return { title: subject.title, description: 'free metal' }
}
