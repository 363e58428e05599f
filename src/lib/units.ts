/** Conversion constants. Exact by definition unless a source says otherwise; the one place where units meet. */

export const KMH_PER_MPS = 3.6;
/** International mile, 1959. */
export const KMH_PER_MPH = 1.609344;
/** International nautical mile, 1 852 m. */
export const KMH_PER_KNOT = 1.852;
export const M_PER_KM = 1000;
export const M_PER_MILE = 1609.344;
export const M_PER_FOOT = 0.3048;
/** Standard gravity, CGPM 1901. */
export const MPS2_PER_G = 9.80665;
export const RAD_PER_DEG = Math.PI / 180;
export const BAR_PER_KPA = 0.01;
/** 1 psi = 6 894.757293168 Pa (NIST SP 811, B.8). */
export const BAR_PER_PSI = 0.06894757293168;
export const S_PER_MS = 0.001;
export const US_PER_S = 1_000_000;
export const PCT_PER_ONE = 100;
