import type { EvidenceItemDto } from '../../shared/evidence/item'
import { formatDuration, formatNumber } from '../../shared/format'
import type { Scope } from '../../shared/permissions'
import type { StatedQuantity } from '../../shared/schemas/agent'
import type { AgentStabilityDto, StabilityDto, StabilityRowDto } from '../../shared/schemas/stability'
import { PLASMA_ASSUMPTIONS } from '../../shared/science/equilibria/media'
import { placeAgents } from '../../shared/science/placement/place'
import type { ScreeningProfile } from '../../shared/science/placement/profile'
import type { Placement } from '../../shared/science/placement/types'
import type { Deps } from '../platform/deps'
import { listRecordRows } from '../queries/records'
import { acidHalfLives } from './acidHalfLives'
import { readAgents, stated, type AgentView } from './agentView'
import { isAllSigned } from './listAgents'
import { noSuchAgent } from './registryWords'
import { screeningProfile, type ProfileInUse } from './screeningProfile'
import { toRecordRow } from './showRecord'
import { speciationSystem } from './speciationSystem'
import { conditionalFigure, rateFigure } from './stabilityFigures'

interface StabilityInput { programmeId: string, scope: Scope }

/** What equilibrium and kinetics say of every agent under the programme's profile. */
export async function showStability(deps: Pick<Deps, 'db'>, { programmeId, scope }: StabilityInput): Promise<StabilityDto> {
  const [agents, inUse] = await Promise.all([readAgents(deps.db, programmeId, scope), screeningProfile(deps.db, programmeId)])
  return { conditions: conditionsOf(inUse), agents: rowsOf(agents, inUse.profile, scope), inAcid: acidHalfLives(agents) }
}

/** The same for one agent, with its records and the two figures. */
export async function showAgentStability(deps: Pick<Deps, 'db'>, { programmeId, scope, code }: StabilityInput & { code: string }): Promise<AgentStabilityDto> {
  const [agents, inUse] = await Promise.all([readAgents(deps.db, programmeId, scope), screeningProfile(deps.db, programmeId)])
  const agent = agents.find(one => one.row.code === code)
  if (!agent) throw noSuchAgent()
  const records = await listRecordRows(deps.db, programmeId, scope, agent.row.id)
  return {
    conditions: conditionsOf(inUse), agent: rowsOf([agent], inUse.profile, scope)[0]!, records: records.map(toRecordRow),
    halfLives: rowsOf(agents, inUse.profile, scope).flatMap(({ id, code: of, mechanism, topology, halfLife }) => halfLife ? [{ id, code: of, mechanism, topology, halfLife }] : []),
    speciation: speciationSystem(agent), conditionalFigure: conditionalFigure(agent), rateFigure: rateFigure(agent, inUse.profile, scope !== 'signed'), assumptions: [...PLASMA_ASSUMPTIONS],
  }
}

function conditionsOf({ profile, name }: ProfileInUse): StabilityDto['conditions'] {
  return {
    profileName: name, pH: profile.pH, temperature_K: profile.temperature_K,
    competitors: `exchangeable Zn ${formatNumber(profile.exchangeableZn_uM)} µM, Cu ${formatNumber(profile.exchangeableCu_uM)} µM, Ca ${formatNumber(profile.exchangeableCa_mM)} mM`,
    residence: `${formatDuration(profile.eliminationHalfLife_s)}, ${profile.eliminationSpecies}`, residence_s: profile.eliminationHalfLife_s,
  }
}

function rowsOf(agents: readonly AgentView[], profile: ScreeningProfile, scope: Scope): StabilityRowDto[] {
  const placements = placeAgents(agents.map(agent => agent.placement), profile, { includeUnsigned: scope !== 'signed' })
  return agents.map(agent => toRow(agent, placements.find(one => one.complexId === agent.row.id)!))
}

function toRow({ row, payload, ligand, evidence }: AgentView, placement: Placement): StabilityRowDto {
  const own = (quantity: string): StatedQuantity | null => {
    const item = preferred(evidence.filter(one => one.quantity === quantity))
    return item ? { value: item.value, state: item.checkState, note: typeof item.detail.mediumNote === 'string' ? item.detail.mediumNote : null } : null
  }
  return {
    id: row.id, code: row.code, metal: payload.metal, mechanism: payload.mechanism, topology: ligand.topology, ligand: row.ligandCode, signed: isAllSigned(placement, evidence),
    logK: own('logK'), logKConditional: own('logKConditional'), pM: own('pM') ?? stated(placement.pM, evidence), bound: stated(placement.boundAtEquilibrium_frac, evidence),
    kd: stated(placement.kd_per_s, evidence), halfLife: stated(placement.halfLife_s, evidence), loss: stated(placement.loss_frac, evidence),
    acidHalfLife: own('halfLifeAcid_s'), zincPhosphate: own('zincPhosphateRatio'), decades: placement.decadesExtrapolated, verdict: { ...placement.verdict },
    flags: [...new Set([...placement.flags.map(flag => flag.sentence), ...mediumFlags(evidence)])],
  }
}

/** As the placement chooses: the newest signed, or the newest where none is signed. */
function preferred(items: readonly EvidenceItemDto[]): EvidenceItemDto | undefined {
  return items.filter(item => item.signed).at(-1) ?? items.at(-1)
}

/** Constants of different media are used side by side only with a word about it. */
function mediumFlags(evidence: readonly EvidenceItemDto[]): string[] {
  const notes = evidence.flatMap(item => typeof item.detail.mediumNote === 'string' ? [item.detail.mediumNote] : [])
  const constants = evidence.filter(item => item.quantity.startsWith('logK') && item.quantity !== 'logKConditional')
  const media = new Set(constants.map(item => `${String(item.conditions.ionicStrength_M)} M ${String(item.conditions.medium)}`))
  return media.size > 1 ? [...notes, `Constants from different media stand side by side: ${[...media].join(' and ')}.`] : notes
}
