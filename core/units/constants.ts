/**
 * Physical constants in the internal units (ps, 1/ps, meV, K, µm).
 * Source: CODATA 2018/2022 (exact SI values of h, e, k_B, c).
 */

/** Reduced Planck constant, meV·ps. */
export const HBAR = 0.6582119569;
/** Boltzmann constant, meV/K. */
export const K_B = 0.08617333262;
/** h·c, meV·µm. */
export const HC = 1239.841984;
/** Speed of light in vacuum, µm/ps (exact). */
export const C_LIGHT = 299.792458;
/** Elementary charge: 1 meV in fJ (1.602176634e-22 J). */
export const FJ_PER_MEV = 1.602176634e-7;
/** 1 meV as an ordinary frequency, GHz: 1/(2πħ) in 1/ps times 1000. */
export const GHZ_PER_MEV = 1000 / (2 * Math.PI * HBAR);
/** 1 GHz as an angular frequency, 1/ps. */
export const RAD_PER_PS_PER_GHZ = (2 * Math.PI) / 1000;
