/**
 * Physical constants, SI.
 * @source CODATA 2018 recommended values, Tiesinga et al., Rev. Mod. Phys. 93, 025010 (2021); the first four are exact by definition of the SI
 */
export const AVOGADRO_per_mol = 6.02214076e23
export const BOLTZMANN_J_per_K = 1.380649e-23
export const PLANCK_J_s = 6.62607015e-34
export const GAS_J_per_mol_K = 8.31446261815324
export const MAGNETIC_CONSTANT_N_per_A2 = 1.25663706212e-6
export const BOHR_MAGNETON_J_per_T = 9.2740100783e-24
/** Gyromagnetic ratio of the proton, rad s⁻¹ T⁻¹. */
export const PROTON_GAMMA_rad_per_s_T = 2.6752218744e8
/** The same divided by 2π, MHz T⁻¹: turns a proton frequency into a field. */
export const PROTON_GAMMA_MHz_per_T = 42.577478518

/** 0 °C in kelvin, exact. */
export const CELSIUS_ZERO_K = 273.15

/** Effective magnetic moment of Gd³⁺ (S = 7/2, g = 2), in Bohr magnetons: g·√(S(S + 1)). */
export const GD_MU_EFF = 7.937253933193772
