/**
 * Eigenvalues of a homogeneous elastic sphere with a free surface.
 *
 *   torsional   (l-1) j_l(eta) = eta j_(l+1)(eta)
 *   l = 0       xi cot xi = 1 - eta^2/4 (its own equation: the 2 x 2 determinant has wrong roots at l = 0)
 *   spheroidal  a d - b c = 0, l >= 1, with
 *     a = (l(l-1) - eta^2/2) j_l(xi) + 2 xi j_(l+1)(xi)        b = l(l+1)[(l-1) j_l(eta) - eta j_(l+1)(eta)]
 *     c = (l-1) j_l(xi) - xi j_(l+1)(xi)                       d = (l^2-1-eta^2/2) j_l(eta) + eta j_(l+1)(eta)
 *
 * eta = w R / v_T, xi = w R / v_L = eta v_T / v_L; eigenvalues are returned as eta.
 * Source: Lamb, Proc. London Math. Soc. 13, 189 (1881); determinant form as in Sato & Usami (1962), eq. 2.2 (equation
 * number from memory). Domain: l >= 1 torsional, l >= 0 spheroidal, v_L/v_T > sqrt(4/3). Accuracy: 1e-12 relative
 * (tests/engine/sphere.spec.ts, mpmath roots).
 */
import { sphericalBessel } from '../spherical-bessel'
import { findRoots } from './roots'

const bessel = (x: number, order: number): [number, number] => {
  const out = new Float64Array(order + 2)
  sphericalBessel(x, order + 2, out)
  return [out[order]!, out[order + 1]!]
}

/** First `count` torsional eigenvalues eta of angular order l >= 1. */
export const torsionalEigenvalues = (l: number, count: number): number[] => {
  if (!(l >= 1)) throw new RangeError(`torsional modes: expected l >= 1; found ${l}`)
  return findRoots(
    (eta) => {
      const [low, high] = bessel(eta, l)
      // Divided by the small-argument size of j_l, so that the scan does not start in underflow.
      return ((l - 1) * low - eta * high) / (Math.abs(low) + Math.abs(high))
    },
    { from: l === 1 ? 1 : 0.3, step: 0.05, count },
  )
}

/** First `count` spheroidal eigenvalues eta of angular order l >= 0 at the velocity ratio v_L / v_T. */
export const spheroidalEigenvalues = (velocityRatio: number, l: number, count: number): number[] => {
  if (!(velocityRatio > Math.sqrt(4 / 3))) {
    throw new RangeError(
      `sphere modes: expected v_L/v_T above sqrt(4/3) (positive bulk modulus); found ${velocityRatio}`,
    )
  }
  if (l === 0) {
    return findRoots(
      (eta) => {
        const xi = eta / velocityRatio
        return xi * Math.cos(xi) - (1 - (eta * eta) / 4) * Math.sin(xi)
      },
      { from: 0.5, step: 0.05, count },
    )
  }
  return findRoots(
    (eta) => {
      const xi = eta / velocityRatio
      const [lowXi, highXi] = bessel(xi, l)
      const [lowEta, highEta] = bessel(eta, l)
      const scale = (Math.abs(lowXi) + Math.abs(highXi)) * (Math.abs(lowEta) + Math.abs(highEta))
      const half = (eta * eta) / 2
      const a = (l * (l - 1) - half) * lowXi + 2 * xi * highXi
      const b = l * (l + 1) * ((l - 1) * lowEta - eta * highEta)
      const c = (l - 1) * lowXi - xi * highXi
      const d = (l * l - 1 - half) * lowEta + eta * highEta
      return (a * d - b * c) / scale
    },
    { from: l === 1 ? 0.5 : 0.3, step: 0.05, count },
  )
}
