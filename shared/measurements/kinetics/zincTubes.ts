import type { NamedQuantity } from '../../evidence/quantity'
import { zincPhosphate, type ZincAnswer, type ZincPoint } from '../../science/kinetics/zincPhosphate'
import type { KineticsRefusal } from '../../science/kinetics/weightedLinear'
import { leftOutOf } from '../relaxation/exclusions'
import { columnOf } from '../relaxation/noise'
import type { AnalysisInput, Conditions, SeriesTube, TubeResult } from '../types'

const Z_95 = 1.959963984540054
export const RATIO = { name: 'zincPhosphateRatio', label: 'R_{1p}(72 h)/R_{1p}(0)', unit: '' } as const
export const TIME = { name: 'zincPhosphateTime080_s', label: 't_{0.80}', unit: 's' } as const

/** R1 of every row with its error: from R1 as it is, from T1 (s/T²), or from R1p and the buffer. */
export function zincPoints(tube: SeriesTube, { rate1Dia_per_s }: Conditions): ZincPoint[] {
  const times = columnOf(tube, 'time_s') ?? []
  const value = tube.points.columns[1]
  const errors = columnOf(tube, value === 't1_s' ? 't1Se_s' : value === 'rate1Para_per_s' ? 'rate1ParaSe_per_s' : 'rate1Se_per_s')
  return times.map((time_s, i) => {
    const y = (value === undefined ? null : columnOf(tube, value)?.[i]) ?? NaN
    const se = errors?.[i] ?? null
    const added = value === 'rate1Para_per_s' && typeof rate1Dia_per_s === 'number' ? rate1Dia_per_s : 0
    return { time_h: (time_s ?? NaN) / 3600, rate1_per_s: value === 't1_s' ? 1 / y : y + added, se_per_s: value === 't1_s' && se !== null ? se / (y * y) : se }
  })
}

export interface ZincTube { result: TubeResult, answer: ZincAnswer | KineticsRefusal }

/** Ratio against time of one run; points of one time become their mean. */
export function readZincTube(tube: SeriesTube, { conditions, exclusions }: AnalysisInput): ZincTube {
  const left = leftOutOf(tube, exclusions)
  const points = zincPoints(tube, conditions)
  const dia = Number(conditions.rate1Dia_per_s)
  const used = points.filter((_, index) => !left.points.has(index))
  const answer: ZincAnswer | KineticsRefusal = tube.role === 'sample' ? zincPhosphate(averaged(used), dia) : { ok: false, reason: 'blank', message: 'A blank has no complex to follow.', accepted: 'the role sample, if there is complex in it' }
  const start = answer.ok ? averaged(used)[0]!.rate1_per_s - dia : NaN
  const curve = answer.ok ? answer.ratios.map(({ time_h, ratio }) => ({ x: time_h * 3600, y: ratio })) : []
  const base = { tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded: left.tube, passed: [], flags: [], statistics: null, secondOpinion: null, curve }
  // without an answer there is no ratio to show, so the rates stand as they were read
  const shown = points.map(({ time_h, rate1_per_s }, index) => ({ index, x: time_h * 3600, y: answer.ok ? (rate1_per_s - dia) / start : rate1_per_s, fitted: null, residual: null, studentised: null, excluded: left.points.get(index) ?? null }))
  if (!answer.ok) return { answer, result: { ...base, points: shown, headline: null, parameters: [], refusal: { reason: answer.reason, message: answer.message, accepted: answer.accepted } } }
  const { ratio72, timeTo080 } = answer
  const ratio = ratio72 === null ? null : ratioQuantity(ratio72)
  const time: NamedQuantity = timeTo080.status === 'reached' ? timeQuantity(timeTo080.time_h * 3600, '=') : timeQuantity(timeTo080.longerThan_h * 3600, '>')
  return { answer, result: { ...base, points: shown, headline: ratio ?? time, parameters: ratio === null ? [time] : [ratio, time], refusal: null } }
}

export const ratioQuantity = ({ value, se }: { value: number, se: number | null }): NamedQuantity => ({ ...RATIO, value, kind: '=', se, interval: se === null ? null : [value - Z_95 * se, value + Z_95 * se], evidenceId: null })
export const timeQuantity = (value: number, kind: '=' | '>'): NamedQuantity => ({ ...TIME, value, kind, se: null, interval: null, evidenceId: null })

function averaged(points: readonly ZincPoint[]): ZincPoint[] {
  return [...new Set(points.map(point => point.time_h))].map((time_h) => {
    const same = points.filter(point => point.time_h === time_h)
    const known = same.every(point => point.se_per_s !== null)
    return { time_h, rate1_per_s: same.reduce((sum, point) => sum + point.rate1_per_s, 0) / same.length, se_per_s: known ? Math.sqrt(same.reduce((sum, point) => sum + point.se_per_s! ** 2, 0)) / same.length : null }
  })
}
