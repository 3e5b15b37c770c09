import { celsiusToKelvin, kelvinToCelsius } from '#shared/science/units'
import type { Donor, LigandPayload } from '#shared/schemas/ligand'
import type { StructureDto } from '#shared/schemas/structure'

export interface StepRow { value: number | null, se: number | null }
export interface DonorRow { kind: Donor['kind'], element: Donor['element'], count: number | null }

const elementOf = (kind: Donor['kind']): Donor['element'] => (kind.endsWith('N') ? 'N' : kind.endsWith('O') ? 'O' : 'S')

/** What the form of a ligand holds, in the units it is typed in. A structure proposes; what a person typed over a proposal stays. */
export function useLigandForm(initial: LigandPayload | null = null) {
  const protonation = initial?.protonation ?? null
  const form = reactive({
    name: initial?.name ?? '', smiles: initial?.smiles ?? '', donors: (initial?.donors ?? []).map(one => ({ ...one })) as DonorRow[],
    denticity: initial?.denticity ?? null as number | null, topology: initial?.topology ?? '' as string, charge: initial?.charge ?? null as number | null, note: initial?.note ?? '',
    steps: (protonation?.stepwiseLogK ?? []).map(one => ({ ...one })) as StepRow[],
    temperature_C: protonation ? kelvinToCelsius(protonation.temperature_K) : 25, ionicStrength_M: protonation?.ionicStrength_M ?? 0.1, medium: protonation?.medium ?? '', protonationSource: protonation?.source ?? '',
  })
  let proposed: { denticity: number, topology: string, charge: number, donors: string } | null = null

  function propose(structure: StructureDto): void {
    const donors = JSON.stringify(structure.donors)
    if (form.denticity === null || form.denticity === proposed?.denticity) form.denticity = structure.denticity
    if (form.topology === '' || form.topology === proposed?.topology) form.topology = structure.topology
    if (form.charge === null || form.charge === proposed?.charge) form.charge = structure.deprotonatedCharge
    if (form.donors.length === 0 || JSON.stringify(form.donors) === proposed?.donors) form.donors = structure.donors.map(one => ({ ...one }))
    proposed = { denticity: structure.denticity, topology: structure.topology, charge: structure.deprotonatedCharge, donors }
  }
  function setDonorKind(row: DonorRow, kind: string): void {
    row.kind = kind as Donor['kind']
    row.element = elementOf(row.kind)
  }
  /** The payload as the route takes it; a number not given stays null, for the server to word. */
  function toPayload(): Record<string, unknown> {
    const steps = form.steps.filter(step => step.value !== null)
    return {
      name: form.name, smiles: form.smiles.trim(), donors: form.donors.map(({ element, kind, count }) => ({ element, kind, count })), denticity: form.denticity, topology: form.topology, charge: form.charge, note: form.note,
      protonation: steps.length === 0 ? null : { stepwiseLogK: steps, temperature_K: form.temperature_C === null ? null : celsiusToKelvin(form.temperature_C), ionicStrength_M: form.ionicStrength_M, medium: form.medium, source: form.protonationSource },
    }
  }
  return { form, propose, setDonorKind, toPayload }
}
