import { enterReadiness } from '../../../server/services/readiness'
import { EnterReadiness } from '../../../shared/schemas/readiness'
import type { Institute } from './institute'
import type { DemoDeps } from './loadDemo'

const measured = (value: number, se: number | null, conditions: string) => ({ kind: '=', value, se, conditions })
const NONE = { solubility_mM: null, stock_mM: null, injectionVolume_mL: null, osmolality_mOsm_per_kg: null, viscosity_mPa_s: null, onHand_mg: null, needed_mg: null, note: null }

/** Invented: one list that is nearly whole, one that is short of substance, one barely begun. Every other agent has none, and shows that. */
const LISTS = [
  {
    agent: 'SK-07', reason: 'Stock A2 made up and measured.',
    payload: {
      ...NONE, solubility_mM: { kind: '>', value: 400, se: null, conditions: 'water, 25 °C, pH 7.2; nothing left undissolved' }, stock_mM: measured(250, 4, 'lot A2, water'), injectionVolume_mL: measured(0.1, null, 'for 25 g at 1 mmol/kg'),
      osmolality_mOsm_per_kg: measured(410, 12, '250 mM, freezing point'), onHand_mg: measured(640, 1, 'lots A1 and A2 together'), needed_mg: measured(420, null, 'two groups of ten and the dilution series'),
    },
  },
  { agent: 'SK-06', reason: 'Weighed what is left of the lot.', payload: { ...NONE, stock_mM: measured(100, 2, 'lot A1, water'), onHand_mg: measured(85, 1, 'lot A1'), needed_mg: measured(420, null, 'two groups of ten and the dilution series') } },
  { agent: 'SK-10', reason: 'First look at how it dissolves.', payload: { ...NONE, solubility_mM: { kind: '<', value: 150, se: null, conditions: 'water, 25 °C; a residue was left' } } },
] as const

/** What the chemist entered of the readiness of a few agents. */
export async function enterReadinessLists(deps: DemoDeps, { programmeId, people }: Institute): Promise<void> {
  for (const { agent, ...list } of LISTS) await enterReadiness(deps, { actor: people.idris, programmeId, code: agent, body: EnterReadiness.parse({ basedOn: 0, ...list }) })
}
