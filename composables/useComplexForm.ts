import { LANTHANIDES, METAL_CHARGE, type Metal } from '#shared/schemas/metal'
import type { ComplexPayload } from '#shared/schemas/agent'
import type { StructureDto } from '#shared/schemas/structure'

/** What the form of a complex holds; mass and charge are proposed from the ligand's structure and the metal until somebody types over them. */
export function useComplexForm(initial: ComplexPayload | null = null) {
  const form = reactive({
    metal: initial?.metal ?? 'Gd' as string, q: initial?.q ?? null as number | null, qSource: initial?.qSource ?? '', molarMass_g_per_mol: initial?.molarMass_g_per_mol ?? null as number | null,
    charge: initial?.charge ?? null as number | null, mechanism: initial?.mechanism ?? 'T1' as string, analogueNote: initial?.analogueNote ?? '',
  })
  const structure = shallowRef<StructureDto | null>(null)
  let proposed: { mass: number, charge: number } | null = null

  watch([structure, () => form.metal], () => {
    if (!structure.value || !Object.hasOwn(LANTHANIDES, form.metal)) return
    const mass = Math.round((structure.value.deprotonatedMass_g_per_mol + LANTHANIDES[form.metal as Metal].molarMass_g_per_mol) * 100) / 100
    const charge = structure.value.deprotonatedCharge + METAL_CHARGE
    if (form.molarMass_g_per_mol === null || form.molarMass_g_per_mol === proposed?.mass) form.molarMass_g_per_mol = mass
    if (form.charge === null || form.charge === proposed?.charge) form.charge = charge
    proposed = { mass, charge }
  })
  const toPayload = (): Record<string, unknown> => ({ ...form })
  return { form, structure, toPayload }
}
