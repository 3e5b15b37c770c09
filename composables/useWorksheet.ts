import { formatNumber } from '#shared/format'
import type { SheetTube } from '#shared/schemas/tubeSheet'
import { diluteEach, planDilution, weighedStock_mM, type Known } from '#shared/science/relaxometry/dilution'

export interface TubeInput { label: string, role: SheetTube['role'], wanted_mM: number | null }
export interface PlannedTube { stock_uL: number | null, diluent_uL: number | null, conc_mM: number | null, ownSe_mM: number | null, warning: string | null }

const STANDARD_mM = [0.1, 0.25, 0.5, 0.75, 1]
const NOTHING: PlannedTube = { stock_uL: null, diluent_uL: null, conc_mM: null, ownSe_mM: null, warning: null }
const fraction = (percent: number | null): number => (percent ?? 0) / 100

/** Stock and dilutions of a phantom while they are planned: the sheet's numbers follow every key. */
export function useWorksheet() {
  const form = reactive({
    agent: '', lot: '', basis: 'assay' as string, assay: 'icp' as string,
    mass_mg: null as number | null, massSe_mg: 0.1 as number | null, molarMass_g_per_mol: null as number | null, purity_percent: 100 as number | null, puritySe_percent: 1 as number | null,
    water_percent: 0 as number | null, waterSe_percent: 0.5 as number | null, volume_ml: 10 as number | null, volumeSe_ml: 0.025 as number | null, stock_mM: null as number | null, stockSe_mM: null as number | null,
    samePipette: true, calibration_percent: 0.6 as number | null, repeat_percent: 0.3 as number | null, diluentCalibration_percent: 0.6 as number | null, diluentRepeat_percent: 0.3 as number | null,
    least_uL: 10 as number | null, final_uL: 1000 as number | null,
    tubes: [{ label: 'blank', role: 'blank', wanted_mM: 0 }, ...STANDARD_mM.map((wanted_mM, i) => ({ label: `t${i + 2}`, role: 'sample', wanted_mM }))] as TubeInput[],
  })
  const stock = computed<Known | null>(() => {
    if (form.basis === 'assay') return form.stock_mM === null || form.stock_mM <= 0 ? null : { value: form.stock_mM, se: form.stockSe_mM ?? 0 }
    const { mass_mg, molarMass_g_per_mol, volume_ml } = form
    if (mass_mg === null || molarMass_g_per_mol === null || volume_ml === null || mass_mg <= 0) return null
    const made = weighedStock_mM({
      mass_mg, massSe_mg: form.massSe_mg ?? 0, molarMass_g_per_mol, volume_ml, volumeSe_ml: form.volumeSe_ml ?? 0, purity_frac: fraction(form.purity_percent), puritySe_frac: fraction(form.puritySe_percent),
      water_frac: fraction(form.water_percent), waterSe_frac: fraction(form.waterSe_percent),
    })
    return Number.isFinite(made.value) && made.value > 0 ? made : null
  })
  const plans = computed(() => form.tubes.map(tube => stock.value === null || form.final_uL === null || tube.role !== 'sample' || tube.wanted_mM === null ? null : planDilution(stock.value.value, tube.wanted_mM, form.final_uL)))
  const pipettes = computed(() => {
    const forStock = { calibration_frac: fraction(form.calibration_percent), repeat_frac: fraction(form.repeat_percent) }
    return { forStock, forDiluent: form.samePipette ? forStock : { calibration_frac: fraction(form.diluentCalibration_percent), repeat_frac: fraction(form.diluentRepeat_percent) }, samePipette: form.samePipette }
  })
  const made = computed(() => {
    const planned = plans.value.flatMap(plan => plan ?? [])
    return stock.value === null || planned.length === 0 ? null : diluteEach(stock.value, planned, pipettes.value)
  })
  const rows = computed<PlannedTube[]>(() => {
    let at = 0
    return form.tubes.map((tube, i) => {
      const plan = plans.value[i]
      if (tube.role === 'blank') return { ...NOTHING, stock_uL: 0, diluent_uL: form.final_uL, conc_mM: 0 }
      if (!plan) return { ...NOTHING, warning: tube.role === 'sample' && stock.value !== null && (tube.wanted_mM ?? 0) > stock.value.value ? 'stronger than the stock' : null }
      const result = made.value?.tubes[at++]
      const least = form.least_uL ?? 0
      const small = (volume: number): boolean => volume > 0 && volume < least
      return { ...plan, conc_mM: result?.conc_mM ?? null, ownSe_mM: result?.ownSe_mM ?? null, warning: small(plan.stock_uL) || small(plan.diluent_uL) ? `under ${least} µL: dilute the stock first` : null }
    })
  })
  const problems = computed(() => {
    const names = form.tubes.map(tube => tube.label.trim().toLowerCase())
    return [
      ...(form.agent.trim() === '' || form.lot.trim() === '' ? ['agent and batch'] : []), ...(stock.value === null ? ['the stock'] : []),
      ...(names.some(name => name === '') || new Set(names).size < names.length ? ['a name of its own for each tube'] : []),
      ...(form.tubes.some((tube, i) => tube.role === 'sample' && rows.value[i]?.conc_mM === null) ? ['a concentration for each sample, at most the stock\'s'] : []),
    ]
  })
  const sheetTubes = computed<SheetTube[]>(() => form.tubes.map((tube, i) => {
    const row = rows.value[i] ?? NOTHING
    const isSample = tube.role === 'sample'
    return {
      tubeNo: i + 1, label: tube.label.trim(), role: tube.role, agent: isSample ? form.agent.trim() : null, lot: isSample ? form.lot.trim() : null, conc_mM: row.conc_mM ?? 0,
      concSe_mM: isSample ? row.ownSe_mM : null, stock_uL: row.stock_uL, diluent_uL: row.diluent_uL,
    }
  }))
  return {
    form, made, rows, problems, sheetTubes,
    stockWords: computed(() => stock.value === null ? 'not known yet' : `${formatNumber(stock.value.value, 5)} ± ${formatNumber(stock.value.se, 2)} mM`),
    scaleWords: computed(() => made.value === null ? 'The common error follows once the stock is known.' : `Common error of all tubes: ${formatNumber(100 * made.value.scale_frac, 2)} %.`),
    add: () => { form.tubes = [...form.tubes, { label: `t${form.tubes.length + 1}`, role: 'sample', wanted_mM: null }] },
    remove: (index: number) => { form.tubes = form.tubes.filter((_, i) => i !== index) },
  }
}
