import { conditionWords } from '../../shared/evidence/conditionWords'
import type { EvidenceItemDto } from '../../shared/evidence/item'
import { formatDuration } from '../../shared/format'
import { groupBy } from '../../shared/groupBy'
import type { AcidTableDto } from '../../shared/schemas/stability'
import { CELSIUS_ZERO_K } from '../../shared/science/constants'
import type { AgentView } from './agentView'

/** A log K this much lower counts as lower, whatever the errors of the two (common practice, no source). */
const LOWER_BY = 1

type Row = AcidTableDto['rows'][number]

/** Half-lives in acid by acid, concentration and temperature to the degree: a table for each, longest first, with what its order says against log K. */
export function acidHalfLives(agents: readonly AgentView[]): AcidTableDto[] {
  const entries = agents.flatMap(agent => agent.evidence.filter(item => item.quantity === 'halfLifeAcid_s').map(item => ({ agent, item })))
  return [...groupBy(entries, ({ item }) => placeOf(item)).values()].map((group) => {
    const rows = [...groupBy(group, ({ agent }) => agent.row.id).values()].map(ofOne => rowOf(ofOne[0]!.agent, preferred(ofOne.map(one => one.item)))).sort((a, b) => b.halfLife.value.value - a.halfLife.value.value)
    return { condition: conditionWords(group[0]!.item), rows, remarks: remarksOn(rows) }
  }).sort((a, b) => b.rows.length - a.rows.length || a.condition.localeCompare(b.condition))
}

function placeOf({ conditions, id }: EvidenceItemDto): string {
  const { acid, acid_M, temperature_K, method } = conditions
  // an acid that is not stated is the same as another only where both come from one statement
  if (acid === 'notStated') return JSON.stringify([acid, method ?? id])
  return JSON.stringify([acid, acid_M, typeof temperature_K === 'number' ? Math.round(temperature_K - CELSIUS_ZERO_K) : null])
}

/** The newest signed one, or the newest of all where none is signed. */
const preferred = (items: readonly EvidenceItemDto[]): EvidenceItemDto => items.filter(item => item.signed).at(-1) ?? items.at(-1)!

function rowOf({ row, payload, ligand, evidence }: AgentView, item: EvidenceItemDto): Row {
  const constants = evidence.filter(one => one.quantity === 'logK')
  const logK = constants.length > 0 ? preferred(constants) : null
  return {
    id: row.id, code: row.code, metal: payload.metal, mechanism: payload.mechanism, topology: ligand.topology, halfLife: { value: item.value, state: item.checkState, note: null },
    logK: logK && { value: logK.value, state: logK.checkState, note: null },
  }
}

/** An exact value or a bound on the right side: "more than" may stand above, "less than" below. */
const outlasts = (longer: Row, shorter: Row): boolean => longer.halfLife.value.kind !== '<' && shorter.halfLife.value.kind !== '>' && longer.halfLife.value.value > shorter.halfLife.value.value

function remarksOn(rows: readonly Row[]): string[] {
  const remarks: string[] = []
  for (const [k, longer] of rows.entries()) {
    const strongest = rows.slice(k + 1).filter(shorter => longer.metal === shorter.metal && longer.logK?.value.kind === '=' && shorter.logK?.value.kind === '=' && shorter.logK.value.value - longer.logK.value.value >= LOWER_BY && outlasts(longer, shorter))
      .sort((a, b) => b.logK!.value.value - a.logK!.value.value)[0]
    if (!strongest) continue
    const times = longer.halfLife.value.value / strongest.halfLife.value.value
    remarks.push(`${longer.code} holds its metal less strongly at equilibrium than ${strongest.code} (log K ${longer.logK!.value.value.toFixed(1)} against ${strongest.logK!.value.value.toFixed(1)}) and lets go ${times.toPrecision(2)} times more slowly in this acid (${formatDuration(longer.halfLife.value.value)} against ${formatDuration(strongest.halfLife.value.value)}).`)
  }
  return remarks
}
