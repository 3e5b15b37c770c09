import { refuse } from '../least-squares/fitData'
import { defineModel } from './define'

/**
 * Rate of a solution in which part of the agent is bound to a protein with n equal sites:
 *     R = R_dia + r_free·(c − b) + r_bound·b,   b = ½·[c + nP + K − √((c + nP + K)² − 4·c·nP)]
 * P is the protein's concentration and n its sites, both known; K the dissociation constant of one site. The bound amount is written without the cancellation at large K.
 * @source quadratic binding law from mass action; as used for albumin-binding agents, Caravan et al., J. Am. Chem. Soc. 124, 3152 (2002), from memory
 */
export const bindingIsotherm = defineModel({
  id: 'bindingIsotherm',
  version: 1,
  title: 'Binding to a protein, one kind of site',
  equation: 'R = R_dia + r_free·(c − b) + r_bound·b; b = (c + nP + K − √((c + nP + K)² − 4·c·nP))/2',
  source: 'Caravan et al., J. Am. Chem. Soc. 124, 3152 (2002)',
  x: { name: 'conc_mM', label: 'Concentration', unit: 'mM', dimension: 'concentration' },
  y: { name: 'rate_per_s', label: 'Rate', unit: 's^-1', dimension: 'rate' },
  params: {
    rateDia_per_s: { label: 'R_dia', unit: 's^-1', min: 0, max: 1e4 },
    free_per_mM_s: { label: 'r_free', unit: 'mM^-1 s^-1', min: 0, max: 1e4 },
    bound_per_mM_s: { label: 'r_bound', unit: 'mM^-1 s^-1', min: 0, max: 1e5 },
    kd_mM: { label: 'K_d', unit: 'mM', min: 1e-9, max: 1e4 },
  },
  settings: {
    protein_mM: { label: 'Protein', unit: 'mM', dimension: 'concentration', min: 1e-6, max: 100, standard: null },
    sites: { label: 'Sites of one protein', unit: '', dimension: 'none', min: 1, max: 20, standard: 1 },
  },
  valueAndGradient(conc_mM, p, settings, gradient) {
    const sites_mM = settings.protein_mM! * settings.sites!
    const sum = conc_mM + sites_mM + p[3]!
    const root = Math.sqrt(Math.max(0, sum * sum - 4 * conc_mM * sites_mM))
    const bound = (2 * conc_mM * sites_mM) / (sum + root)
    gradient[0] = 1
    gradient[1] = conc_mM - bound
    gradient[2] = bound
    gradient[3] = root === 0 ? 0 : ((p[1]! - p[2]!) * bound) / root
    return p[0]! + p[1]! * (conc_mM - bound) + p[2]! * bound
  },
  guess(conc_mM, rate_per_s, settings) {
    const order = conc_mM.map((_, i) => i).sort((i, j) => conc_mM[i]! - conc_mM[j]!)
    const slope = (i: number, j: number) => (rate_per_s[j]! - rate_per_s[i]!) / (conc_mM[j]! - conc_mM[i]!)
    const distinct = order.filter((i, k) => k === 0 || conc_mM[i]! > conc_mM[order[k - 1]!]!)
    if (distinct.length < 3) return null
    const [first, second] = [distinct[0]!, distinct[1]!]
    const [before, last] = [distinct.at(-2)!, distinct.at(-1)!]
    const start = Math.max(slope(first, second), 1e-3)
    const end = Math.min(Math.max(slope(before, last), 1e-3), 1e4)
    return { rateDia_per_s: Math.min(Math.max(rate_per_s[first]! - start * conc_mM[first]!, 0), 1e4), free_per_mM_s: end, bound_per_mM_s: Math.min(1.3 * Math.max(start, end), 1e5), kd_mM: Math.max(settings.protein_mM! / 5, 1e-4) }
  },
  refuse(conc_mM) {
    const bad = conc_mM.findIndex(conc => conc < 0)
    return bad < 0 ? null : refuse('outOfDomain', `Point ${bad + 1}: the concentration ${conc_mM[bad]} mM is negative.`, 'Concentrations of 0 mM or more.')
  },
  separable: {
    nonlinear: 'kd_mM',
    linear: ['rateDia_per_s', 'free_per_mM_s', 'bound_per_mM_s'],
    basis(conc_mM, kd_mM, settings, phi) {
      const sites_mM = settings.protein_mM! * settings.sites!
      const sum = conc_mM + sites_mM + kd_mM
      const bound = (2 * conc_mM * sites_mM) / (sum + Math.sqrt(Math.max(0, sum * sum - 4 * conc_mM * sites_mM)))
      phi[0] = 1
      phi[1] = conc_mM - bound
      phi[2] = bound
    },
    range: conc_mM => [1e-5, 100 * Math.max(...Array.from(conc_mM), 1e-3)],
    isUpright: () => true,
  },
  example: {
    x: [0, 0.05, 0.1, 0.2, 0.35, 0.5, 0.7, 1, 1.5, 2, 3],
    settings: { protein_mM: 0.6, sites: 1 },
    truth: { rateDia_per_s: 0.6, free_per_mM_s: 5.5, bound_per_mM_s: 32, kd_mM: 0.085 },
  },
})
