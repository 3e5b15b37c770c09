import type { SourceDto, SourceInput } from '#shared/schemas/source'

/** The source of a record: citation, DOI, and whether it was read, remembered or measured. */
export function useSourceForm(initial: SourceInput | null = null) {
  const form = reactive({ citation: initial?.citation ?? '', doi: initial?.doi ?? '', origin: initial?.origin ?? '' as string, note: initial?.note ?? '' })
  function take({ citation, doi, origin, note }: SourceDto): void {
    Object.assign(form, { citation, doi: doi ?? '', origin, note: note ?? '' })
  }
  return { form, take, toInput: () => ({ ...form }) }
}
