/** A stock solution from a weighed batch. Fractions of the mass as weighed; relative standard errors. */
export interface WeighedStock {
  readonly mass_mg: number
  readonly massSe_mg: number
  /** Of the complex as it is pure and dry. */
  readonly molarMass_g_per_mol: number
  readonly purity_frac: number
  readonly puritySe_frac: number
  readonly water_frac: number
  readonly waterSe_frac: number
  readonly volume_ml: number
  readonly volumeSe_ml: number
}

export interface Known { readonly value: number, readonly se: number }

/**
 * Concentration of a weighed stock, mM: c = m·p·(1 − w)/(M·V), with the errors of mass, purity, water content and volume (independent). NaN for a volume or molar
 * mass that is not above 0.
 * @source propagation of uncertainty, JCGM 100:2008 (GUM), 5.1.2
 */
export function weighedStock_mM({ mass_mg, massSe_mg, molarMass_g_per_mol, purity_frac, puritySe_frac, water_frac, waterSe_frac, volume_ml, volumeSe_ml }: WeighedStock): Known {
  if (!(volume_ml > 0) || !(molarMass_g_per_mol > 0)) return { value: NaN, se: NaN }
  const value = (1e3 * mass_mg * purity_frac * (1 - water_frac)) / (molarMass_g_per_mol * volume_ml)
  const relative = Math.hypot(massSe_mg / mass_mg, puritySe_frac / purity_frac, waterSe_frac / (1 - water_frac), volumeSe_ml / volume_ml)
  return { value, se: value * relative }
}

/** Errors of one pipette, relative: `calibration` is the same each time it is used, `repeat` is new each time. */
export interface Pipette { readonly calibration_frac: number, readonly repeat_frac: number }

export interface Dilution { readonly stock_uL: number, readonly diluent_uL: number }

export interface DilutedTube {
  readonly conc_mM: number
  /** Error of this tube alone, for the line. */
  readonly ownSe_mM: number
}

export interface DilutionSeries {
  readonly tubes: readonly DilutedTube[]
  /** Relative error that all tubes with agent share: of the stock, and what the calibration of the pipettes shifts in all of them alike. It belongs to the relaxivity and not to the line. */
  readonly scale_frac: number
}

/**
 * Tubes diluted one by one from a stock: c = c_s·v/(v + d), v and d by two pipettes (which may be the same).
 *
 * With q = d/(v + d): ∂ln c/∂ln v = q, ∂ln c/∂ln d = −q. Repeatability gives each tube q·√(u_v² + u_d²) of its own. Calibration moves tube i by q_i·(s_v − s_d), one and the
 * same s in all tubes, and nothing where one pipette delivers both: the part common to all (the smallest q) joins the scale, and the tube keeps what its own
 * variance has beyond that, √(q² − q_min²), so that each tube's whole error is right; that the two parts move together is left out.
 * @param samePipette one pipette for stock and diluent
 * @source JCGM 100:2008 (GUM), 5.1.2 and 5.2.2 for the correlated part
 */
export function diluteEach(stock: Known, dilutions: readonly Dilution[], { forStock, forDiluent, samePipette }: { forStock: Pipette, forDiluent: Pipette, samePipette: boolean }): DilutionSeries {
  const shares = dilutions.map(({ stock_uL: v, diluent_uL: d }) => ({ q: v + d > 0 ? d / (v + d) : NaN, share: v + d > 0 ? v / (v + d) : NaN }))
  const withAgent = shares.filter(one => one.share > 0)
  const common = withAgent.length === 0 ? 0 : Math.min(...withAgent.map(one => one.q))
  const calibration = samePipette ? 0 : Math.hypot(forStock.calibration_frac, forDiluent.calibration_frac)
  const repeat = Math.hypot(forStock.repeat_frac, forDiluent.repeat_frac)
  return {
    scale_frac: Math.hypot(stock.se / stock.value, common * calibration),
    tubes: shares.map(({ q, share }) => {
      const conc_mM = stock.value * share
      return { conc_mM, ownSe_mM: share > 0 ? conc_mM * Math.hypot(q * repeat, Math.sqrt(q * q - common * common) * calibration) : 0 }
    }),
  }
}

/**
 * Tubes of a serial dilution: each is made from the one before with the same steps. The error of a step is handed on to every later tube, so that the own errors
 * are correlated; they are given per tube, which makes the line's error a little too large.
 * @param steps the first is taken from the stock
 */
export function diluteInSeries(stock: Known, steps: readonly Dilution[], pipettes: { forStock: Pipette, forDiluent: Pipette, samePipette: boolean }): DilutionSeries {
  let value = stock.value
  let variance = 0
  const tubes = steps.map((step) => {
    const made = diluteEach({ value, se: 0 }, [step], pipettes)
    const [tube] = made.tubes
    value = tube?.conc_mM ?? NaN
    variance += value > 0 ? ((tube?.ownSe_mM ?? 0) / value) ** 2 + made.scale_frac ** 2 : 0
    return { conc_mM: value, ownSe_mM: value * Math.sqrt(variance) }
  })
  return { tubes, scale_frac: stock.se / stock.value }
}

/** Volumes for a wanted concentration; null where the stock is too weak for it. */
export function planDilution(stock_mM: number, wanted_mM: number, final_uL: number): Dilution | null {
  if (!(stock_mM > 0) || !(final_uL > 0) || !(wanted_mM >= 0) || wanted_mM > stock_mM) return null
  const stock_uL = (wanted_mM / stock_mM) * final_uL
  return { stock_uL, diluent_uL: final_uL - stock_uL }
}
