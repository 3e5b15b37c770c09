/** Species of one agent against pH under amounts that a person chooses, as numbers and as a figure. Pure: the browser works it out while a cursor is moved. */
import type { FigureDash, FigureLayer, FigureSpec, FigureToken } from '../schemas/figure'
import type { SpeciationSystemDto } from '../schemas/stability'
import { formatFixed, formatNumber } from '../format'
import { conditionalConstant } from '../science/equilibria/conditional'
import { followPath, NO_SOLIDS, type PathDone } from '../science/equilibria/continuation'
import { PLASMA_SPECIES } from '../science/equilibria/media'
import { NAMED_MEDIA } from '../science/equilibria/namedMedia'
import type { Component, Species } from '../science/equilibria/system'

/** Amounts in the flask: metal and ligand in mM, and what else there is, by component, in mol/L. */
export interface SpeciationAmounts {
  readonly mediumId: string
  readonly metal_mM: number
  readonly ligand_mM: number
  /** mol/L by component: totals, or free concentrations where the medium states those. */
  readonly others_M: Readonly<Record<string, number>>
}

export interface SpeciesShare { readonly name: string, readonly share: number }
export interface SpeciationPoint {
  readonly pH: number
  readonly shares: readonly SpeciesShare[]
  /** −log10 of the free metal ion of the agent. */
  readonly pMetal: number
  readonly logKCond: number
  readonly logAlphaLigand: number
  readonly logAlphaMetal: number
  readonly logAlphaComplex: number
}
export type Refused = { readonly ok: false, readonly message: string, readonly accepted: string }

/** In a flask nothing is there but what is put in. */
export const FLASK = 'flask'
export const MEDIA: readonly { id: string, title: string, amountsAre: 'totals' | 'free', amounts_M: Readonly<Record<string, number>>, assumptions: readonly string[] }[] = [
  { id: FLASK, title: 'In a flask', amountsAre: 'totals', amounts_M: {}, assumptions: ['Metal, ligand and the competing metals named; no buffer, no carbonate.'] },
  ...NAMED_MEDIA,
]
export const PH_RANGE = [1, 12] as const
const GRID = Array.from({ length: 111 }, (_, k) => Math.round((PH_RANGE[0] + k / 10) * 10) / 10)
/** Species below this share everywhere are left out of the drawing. */
const LEAST_SHARE = 0.005
const MOST_CURVES = 8

/** Components whose share can be asked for: the metal, the ligand, and competing metals that are there. */
export function sharedComponents(system: SpeciationSystemDto, amounts: SpeciationAmounts): string[] {
  return ['Ln', 'L', ...system.competitors.filter(metal => (amounts.others_M[metal] ?? 0) > 0)]
}

function mediumOf(amounts: SpeciationAmounts) {
  return MEDIA.find(one => one.id === amounts.mediumId) ?? MEDIA[0]!
}

function systemOf(system: SpeciationSystemDto, amounts: SpeciationAmounts): { components: Component[], species: Species[] } {
  const isFree = mediumOf(amounts).amountsAre === 'free'
  const others = Object.entries(amounts.others_M).filter(([, value]) => value > 0)
  const components: Component[] = [
    { name: 'Ln', total_M: amounts.metal_mM / 1e3 }, { name: 'L', total_M: amounts.ligand_mM / 1e3 },
    ...others.map(([name, value]): Component => isFree ? { name, logFree: Math.log10(value) } : { name, total_M: value }),
  ]
  const present = new Set([...components.map(one => one.name), 'H'])
  const isPossible = (one: Species): boolean => Object.keys(one.stoichiometry).every(name => present.has(name))
  const background = PLASMA_SPECIES.filter(one => one.name !== 'OH' && one.name !== 'LnOH' && isPossible(one))
  return { components, species: [...system.species.filter(isPossible), ...background] }
}

function amountProblem(amounts: SpeciationAmounts): Refused | null {
  const bad = [['metal', amounts.metal_mM / 1e3], ['ligand', amounts.ligand_mM / 1e3], ...Object.entries(amounts.others_M)] as const
  const wrong = bad.find(([, value]) => !(value >= 0 && value <= 10))
  if (wrong) return { ok: false, message: `The amount of ${wrong[0]} is no concentration.`, accepted: '0 to 10 mol/L' }
  return amounts.metal_mM > 0 && amounts.ligand_mM > 0 ? null : { ok: false, message: 'There is no metal, or no ligand.', accepted: 'more than 0 of both' }
}

/** Species along the grid of pH. */
export function speciate(system: SpeciationSystemDto, amounts: SpeciationAmounts): PathDone | Refused {
  return amountProblem(amounts) ?? followPath(systemOf(system, amounts), { kind: 'pcH', values: GRID })
}

/** Shares of one component at one pH, largest first, with the constants and coefficients that hold there. */
export function speciationAt(system: SpeciationSystemDto, amounts: SpeciationAmounts, { pH, component }: { pH: number, component: string }): SpeciationPoint | Refused {
  const problem = amountProblem(amounts)
  if (problem) return problem
  const input = systemOf(system, amounts)
  const path = followPath(input, { kind: 'pcH', values: [pH] })
  if (!path.ok) return path
  const { logKCond, logAlphaLigand, logAlphaMetal, logAlphaComplex } = conditionalConstant(system, pH)
  const shares = sharesOf(path, input.species, component).map(({ name, values }) => ({ name: speciesName(name, system.metal), share: values[0]! })).filter(one => one.share >= 1e-6).sort((a, b) => b.share - a.share)
  return { pH, shares, pMetal: -Math.log10(path.species_M.Ln![0]!), logKCond, logAlphaLigand, logAlphaMetal, logAlphaComplex }
}

/** Share of a component in each of its species, in order of the largest share. */
function sharesOf(path: PathDone, species: readonly Species[], component: string): { name: string, values: number[] }[] {
  const members = [{ name: component, times: 1 }, ...species.filter(one => (one.stoichiometry[component] ?? 0) > 0).map(one => ({ name: one.name, times: one.stoichiometry[component]! }))]
    .filter(one => path.species_M[one.name] !== undefined)
  const totals = path.values.map((_, i) => members.reduce((sum, one) => sum + one.times * path.species_M[one.name]![i]!, 0))
  return members.map(({ name, times }) => ({ name, values: path.species_M[name]!.map((c, i) => times * c / totals[i]!) }))
    .sort((a, b) => Math.max(...b.values) - Math.max(...a.values))
}

/** 'GdL' for LnL; the bare component is "free Gd". */
export function speciesName(name: string, metal: string): string {
  if (name === 'Ln') return `free ${metal}`
  if (name === 'L') return 'free L'
  return /^[A-Z][a-z]?$/.test(name) ? `free ${name}` : name.replace(/^Ln/, metal)
}

const STYLES: readonly { token: FigureToken, dash: FigureDash }[] = [
  { token: 's1', dash: 'solid' }, { token: 'ink-2', dash: 'dashed' }, { token: 's2', dash: 'dashdot' }, { token: 's3', dash: 'dotted' }, { token: 's4', dash: 'dashed' },
  { token: 's5', dash: 'solid' }, { token: 's6', dash: 'dashdot' }, { token: 'ink-3', dash: 'dotted' },
]

export interface SpeciesFigureInput { system: SpeciationSystemDto, amounts: SpeciationAmounts, path: PathDone, component: string, as: 'lines' | 'stacked', at: SpeciationPoint, code: string }

/** The diagram with its cursor. */
export function speciesFigure({ system, amounts, path, component, as, at, code }: SpeciesFigureInput): FigureSpec {
  const of = component === 'Ln' ? system.metal : component === 'L' ? 'ligand' : component
  const drawn = sharesOf(path, systemOf(system, amounts).species, component).filter(one => Math.max(...one.values) >= LEAST_SHARE).slice(0, MOST_CURVES)
    // The complex stands first whatever else there is: at the bottom of the stack, in the first colour.
    .sort((a, b) => Number(b.name === 'LnL') - Number(a.name === 'LnL'))
    .map((one, k) => ({ ...one, label: speciesName(one.name, system.metal), style: STYLES[k % STYLES.length]! }))
  const percent = (share: number): number => 100 * share
  const here = at.shares.find(one => drawn.some(curve => curve.label === one.name))
  const rule: FigureLayer = { type: 'rule', name: `pH ${formatFixed(at.pH, 1)}`, axis: 'x', at: at.pH, dash: 'dotted' }
  const lines = drawn.map(({ label, style, values }): FigureLayer => ({ type: 'line', name: label, ...style, points: path.values.map((x, i) => ({ x, y: percent(values[i]!) })) }))
  const dots = here && as === 'lines' ? [{ type: 'points' as const, name: 'at the cursor', token: drawn.find(curve => curve.label === here.name)!.style.token, points: [{ x: at.pH, y: percent(here.share), label: here.name }] }] : []
  const most = here ? `pH ${formatFixed(at.pH, 1)}: ${formatFixed(percent(here.share), 1)} % ${here.name}` : `pH ${formatFixed(at.pH, 1)}`
  return {
    id: `species-${component}`, title: `Species of ${of} against pH`, x: { label: 'pH', unit: null, scale: 'linear', domain: [...PH_RANGE] }, y: { label: `% of total ${of}`, unit: null, scale: 'linear', domain: [0, 100] },
    layers: [...(as === 'stacked' ? bandsOf(drawn, path) : lines), rule, ...dots],
    text: `Species of ${of} for ${code} between pH ${PH_RANGE[0]} and ${PH_RANGE[1]}, ${amountWords(system, amounts)}. ${most}.`,
    caption: `${amountWords(system, amounts)}. ${NO_SOLIDS}`,
    table: {
      columns: [{ key: 'pH', label: 'pH', unit: null, numeric: true }, ...drawn.map((one, k) => ({ key: `s${k}`, label: one.label, unit: '%', numeric: true }))],
      rows: path.values.flatMap((pH, i) => i % 5 === 0 ? [{ pH, ...Object.fromEntries(drawn.map((one, k) => [`s${k}`, Math.round(percent(one.values[i]!) * 100) / 100])) }] : []),
    },
  }
}

function bandsOf(drawn: readonly { label: string, style: { token: FigureToken }, values: readonly number[] }[], path: PathDone): FigureLayer[] {
  const floor = path.values.map(() => 0)
  return drawn.flatMap(({ label, style, values }): FigureLayer[] => {
    const points = path.values.map((x, i) => ({ x, low: floor[i]!, high: floor[i]! + 100 * values[i]! }))
    points.forEach(({ high }, i) => { floor[i] = high })
    return [
      { type: 'band', name: label, token: style.token, points },
      { type: 'line', name: label, token: style.token, labelled: false, points: points.map(({ x, high }) => ({ x, y: high })) },
    ]
  })
}

/** 'Gd 1 mM, ligand 1 mM, Zn 0.1 mM' or the name of the medium. */
export function amountWords(system: SpeciationSystemDto, amounts: SpeciationAmounts): string {
  const medium = mediumOf(amounts)
  const own = `${system.metal} ${formatNumber(amounts.metal_mM)} mM, ligand ${formatNumber(amounts.ligand_mM)} mM`
  if (medium.id === FLASK) return [own, ...Object.entries(amounts.others_M).filter(([, value]) => value > 0).map(([name, value]) => `${name} ${formatNumber(value * 1e3)} mM`)].join(', ')
  const isEdited = Object.entries(amounts.others_M).some(([name, value]) => medium.amounts_M[name] !== value)
  return `${own}; ${medium.title.toLowerCase()}${isEdited ? ', edited' : ''}`
}
