/**
 * Coefficients of a six-stage Rosenbrock method of order 4 with an embedded order 3 (RODASP: Steinebach 1995, Preprint 1741, TH
 * Darmstadt; in the family of Hairer & Wanner, Solving Ordinary Differential Equations II, 2nd ed. 1996, section VI.4;
 * citations from memory). It is L-stable and stiffly accurate, and keeps its order on stiff linear problems, where its
 * relatives lose one or two. The last two stages are corrections: the embedded result is the state before the last one.
 *
 * The coefficients stand in the transformed form that needs no product with the Jacobian: a = α·Γ⁻¹, c = diag(1/γ) − Γ⁻¹,
 * m = b·Γ⁻¹. rosenbrock-coefficients.test.ts undoes the transformation and checks the eight conditions of order 4 and the four
 * of order 3 for the embedded result and the continuous extension.
 */

export const gamma = 0.25;

/** State of stage i = start + Σ a[i][j]·U[j]. Stage 6 adds U[5] to stage 5, and the result adds U[6]. */
export const stageWeights = [
  [],
  [3],
  [1.831036793486759, 0.4955183967433795],
  [2.304376582692669, -0.05249275245743001, -1.176798761832782],
  [-7.170454962423024, -4.741636671481785, -16.31002631330971, -1.062004044111401],
  [-7.170454962423024, -4.741636671481785, -16.31002631330971, -1.062004044111401, 1],
] as const;

export const resultWeights = [
  -7.170454962423024, -4.741636671481785, -16.31002631330971, -1.062004044111401, 1, 1,
] as const;

/** Right-hand side of stage i = f(its state) + Σ c[i][j]·U[j]/step. */
export const couplings = [
  [],
  [-12],
  [-8.791795173947035, -2.207865586973518],
  [10.81793056857153, 6.780270611428266, 19.5348594464241],
  [34.19095006749676, 15.49671153725963, 54.7476087596413, 14.16005392148534],
  [34.62605830930532, 15.30084976114473, 56.99955578662667, 18.40807009793095, -5.714285714285717],
] as const;

/** Continuous extension: start·(1−θ) + θ·(result + (1−θ)·(d₁ + θ·d₂)) with dₖ = Σ extension[k][j]·U[j]. */
export const extension = [
  [25.09876703708589, 11.62013104361867, 28.49148307714626, -5.664021568594133, 0],
  [1.638054557396973, -0.7373619806678748, 8.47791821923899, 15.9925314877952, -1.882352941176471],
] as const;
