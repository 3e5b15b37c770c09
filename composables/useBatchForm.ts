import type { BatchPayload } from '#shared/schemas/batch'
import { unitOf } from '#shared/science/units'

const percent = unitOf('%', 'fraction')
const toPercent = (fraction: number | null | undefined): number | null => fraction === null || fraction === undefined ? null : percent.fromSi(fraction)
const toFraction = (value: number | null): number | null => value === null ? null : percent.toSi(value)

/** What the form of a batch holds, fractions in per cent. Free metal: not measured, found, or below the detection limit; never a zero by default. */
export function useBatchForm(initial: BatchPayload | null = null) {
  const free = initial?.freeMetal ?? null
  const form = reactive({
    date: initial?.date ?? '', purity_percent: toPercent(initial?.purity_frac), water_percent: toPercent(initial?.water_frac), counterIon: initial?.counterIon ?? '',
    excessLigand_percent: toPercent(initial?.excessLigand_frac), isomerRatio: initial?.isomerRatio ?? '', hplc_percent: toPercent(initial?.hplcPurity_frac),
    basis: initial?.concentrationBasis ?? '' as string, total_mM: initial?.totalMetal?.conc_mM ?? null as number | null, totalSe_mM: initial?.totalMetal?.se_mM ?? null as number | null, totalMethod: initial?.totalMetal?.method ?? 'icp' as string,
    free: free ? (free.kind === '=' ? 'found' : 'below') : 'notMeasured' as string, free_percent: free?.kind === '=' ? toPercent(free.value_frac) : null, freeSe_percent: toPercent(free?.se_frac),
    freeLimit_percent: toPercent(free?.detectionLimit_frac), freeMethod: free?.method ?? '', note: initial?.note ?? '',
  })
  function freeMetal(): Record<string, unknown> | null {
    if (form.free === 'notMeasured') return null
    const limit = toFraction(form.freeLimit_percent)
    const shared = { detectionLimit_frac: limit, method: form.freeMethod }
    return form.free === 'below' ? { kind: '<', value_frac: limit, se_frac: null, ...shared } : { kind: '=', value_frac: toFraction(form.free_percent), se_frac: toFraction(form.freeSe_percent), ...shared }
  }
  const toPayload = (): Record<string, unknown> => ({
    date: form.date, purity_frac: toFraction(form.purity_percent), water_frac: toFraction(form.water_percent), counterIon: form.counterIon, excessLigand_frac: toFraction(form.excessLigand_percent),
    isomerRatio: form.isomerRatio, hplcPurity_frac: toFraction(form.hplc_percent), concentrationBasis: form.basis,
    totalMetal: form.total_mM === null ? null : { conc_mM: form.total_mM, se_mM: form.totalSe_mM, method: form.totalMethod }, freeMetal: freeMetal(), note: form.note,
  })
  return { form, toPayload }
}
