import { CELSIUS_ZERO_K } from '../../shared/science/constants'
import { controlChart, LEAST_BASE, WARNING_SD } from '../../shared/science/relaxometry/controlChart'
import { formatFixed, formatNumber, NBSP } from '../../shared/format'
import type { FlagDto } from '../../shared/schemas/fit'
import type { FigureSpec } from '../../shared/schemas/figure'
import type { InstrumentDto } from '../../shared/schemas/instrument'
import type { Deps } from '../platform/deps'
import { currentReferences, type ReadingRow, referenceReadings } from '../queries/instruments'

type Chart = InstrumentDto['charts'][number]

/** Charts of one reference tube: one for each measurement and temperature, since a time at 25 °C says nothing of one at 37 °C. */
export async function chartsOf({ db, kinds }: Pick<Deps, 'db' | 'kinds'>, { programmeId, instrument, label, since }: { programmeId: string, instrument: string, label: string, since: Date }): Promise<Chart[]> {
  const all = (await referenceReadings(db, programmeId, { instrument, label })).filter(one => one.on >= since)
  // Series of one file share its reading: one session, however many agents were in it.
  const readings = all.filter((one, i) => all.findIndex(other => other.uploadId === one.uploadId && groupOf(other) === groupOf(one)) === i)
  const groups = new Map<string, ReadingRow[]>()
  for (const one of readings) {
    const key = groupOf(one)
    groups.set(key, [...groups.get(key) ?? [], one])
  }
  return [...groups.values()].map(rows => chartDto(rows, kinds[rows[0]!.kind]?.title ?? rows[0]!.kind))
}

const groupOf = (one: Pick<ReadingRow, 'kind' | 'quantity' | 'temperature_K'>): string => [one.kind, one.quantity, one.temperature_K === null ? '' : Math.round(one.temperature_K)].join('|')

function chartDto(rows: readonly ReadingRow[], kindTitle: string): Chart {
  const [first] = rows
  if (!first) throw new Error('A chart was asked for without a session.')
  const chart = controlChart(rows.map(one => one.value))
  const label = first.quantity.startsWith('t2') ? 'T_2' : 'T_1'
  const sessions = rows.map((one, i) => {
    const judged = chart.sessions[i]!
    return { uploadId: one.uploadId, seriesId: one.seriesId, title: one.title, agentCode: one.agentCode, on: one.on.toISOString().slice(0, 10), value: one.value, se: one.se, isBase: judged.isBase, z: judged.z, isOutside: judged.isOutside }
  })
  return {
    quantity: first.quantity, label, unit: 's', kindTitle, temperature_K: first.temperature_K, centre: chart.centre, sd: chart.sd, baseCount: chart.baseCount, sessions, figure: figureOf(sessions, chart, label),
    note: chart.centre === null
      ? `${rows.length} of the ${LEAST_BASE} sessions that give a centre; none is judged yet.`
      : `Centre and SD from the first ${chart.baseCount} sessions since the tube was named; each of these is held against the others. Outside means more than ${WARNING_SD} SD from the centre.`,
  }
}

function figureOf(sessions: Chart['sessions'], { centre, sd }: { centre: number | null, sd: number | null }, label: string): FigureSpec {
  const at = (i: number) => ({ x: i + 1, y: sessions[i]!.value, id: sessions[i]!.seriesId, label: sessions[i]!.on })
  const kept = sessions.flatMap((one, i) => one.isOutside ? [] : [at(i)])
  const outside = sessions.flatMap((one, i) => one.isOutside ? [at(i)] : [])
  const bars = sessions.flatMap(({ value, se }, i) => se === null ? [] : [{ x: i + 1, y: value, low: value - se, high: value + se }])
  const rules = centre === null || sd === null ? [] : [0, -1, 1, -2, 2, -3, 3].map(k => ({ type: 'rule' as const, name: k === 0 ? 'centre' : `${k > 0 ? '+' : '−'}${Math.abs(k)} SD`, axis: 'y' as const, at: centre + k * sd, dash: k === 0 ? 'solid' as const : Math.abs(k) === 2 ? 'dashed' as const : 'dotted' as const }))
  const out = outside.length === 0 ? 'None lies outside two SD.' : `Outside two SD: ${outside.map(one => one.label).join(', ')}.`
  return {
    id: 'control-chart', title: `Reference tube, ${label.replace('_', '')} by session`, text: `${sessions.length} sessions. ${out}`, caption: 'Bars are ±1 SE. Dashed: two SD.',
    x: { label: 'Session', unit: null, scale: 'linear' }, y: { label, unit: 's', scale: 'linear' },
    layers: [
      ...rules, ...(bars.length > 0 ? [{ type: 'errorBars' as const, name: '±1 SE', token: 'ink-2' as const, points: bars }] : []),
      { type: 'points', name: 'within two SD', token: 's1', points: kept },
      ...(outside.length > 0 ? [{ type: 'points' as const, name: 'outside two SD', token: 'fault' as const, open: true, points: outside }] : []),
    ],
    table: {
      columns: [
        { key: 'on', label: 'Session', unit: null, numeric: false }, { key: 'agent', label: 'Agent', unit: null, numeric: false }, { key: 'value', label, unit: 's', numeric: true }, { key: 'se', label: 'SE', unit: 's', numeric: true },
        { key: 'z', label: 'Distance', unit: 'SD', numeric: true },
      ],
      rows: sessions.map(one => ({ on: one.on, agent: one.agentCode, value: one.value, se: one.se, z: one.z })),
    },
  }
}

/**
 * Flags of the session in which a series was measured: its reference tube against the others of the instrument. They are read when the fit is looked at and are no part of
 * what is stored with it, since they follow from other series as well.
 */
export async function sessionFlags(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, uploadId, instrument }: { programmeId: string, uploadId: string, instrument: unknown }): Promise<FlagDto[]> {
  if (typeof instrument !== 'string') return []
  const reference = (await currentReferences(deps.db, programmeId)).find(one => one.instrument === instrument)
  if (!reference) return []
  const charts = await chartsOf(deps, { programmeId, instrument, label: reference.label, since: reference.since })
  return charts.flatMap(chart => chart.sessions.filter(one => one.uploadId === uploadId && one.isOutside).map((one): FlagDto => ({
    id: 'session', title: 'Reference tube outside two SD', tubeNo: null,
    sentence: `${chart.label.replace('_', '')} of ${reference.label} is ${formatNumber(one.value, 4)}${NBSP}s on ${one.on}, ${formatFixed(Math.abs(one.z ?? 0), 1)} SD from the mean of the base sessions${chart.temperature_K === null ? '' : ` at ${formatFixed(chart.temperature_K - CELSIUS_ZERO_K, 0)} °C`}. Check temperature, timing and B1 of that session before signing.`,
  })))
}
