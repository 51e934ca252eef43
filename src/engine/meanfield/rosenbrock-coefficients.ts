/**
 * Coefficients of the six-stage Rosenbrock method of order 4 with an embedded order 3 (RODAS; Hairer & Wanner, Solving
 * Ordinary Differential Equations II, 2nd ed. 1996, section IV.7 and VI.4; citation from memory). It is L-stable and
 * stiffly accurate: the last two stages are corrections, so the embedded result is the state before the last one.
 *
 * With U = (stages) they stand in the transformed form that needs no product with the Jacobian: a = α·Γ⁻¹,
 * c = diag(1/γ) − Γ⁻¹, m = b·Γ⁻¹. rosenbrock-coefficients.test.ts undoes the transformation and checks the eight
 * conditions of order 4, those of the embedded method and of the continuous extension.
 */

export const gamma = 0.25;

/** State of stage i = start + Σ a[i][j]·U[j]. Stage 6 adds U[5] to stage 5, and the result adds U[6]. */
export const stageWeights = [
  [],
  [1.544],
  [0.9466785280815826, 0.2557011698983284],
  [3.314825187068521, 2.896124015972201, 0.9986419139977817],
  [1.221224509226641, 6.019134481288629, 12.53708332932087, -0.687886036105895],
  [1.221224509226641, 6.019134481288629, 12.53708332932087, -0.687886036105895, 1],
] as const;

export const resultWeights = [
  1.221224509226641, 6.019134481288629, 12.53708332932087, -0.687886036105895, 1, 1,
] as const;

/** Right-hand side of stage i = f(its state) + Σ c[i][j]·U[j]/step. */
export const couplings = [
  [],
  [-5.6688],
  [-2.430093356833875, -0.2063599157091915],
  [-0.1073529058151375, -9.594562251023355, -20.47028614809616],
  [7.496443313967647, -10.24680431464352, -33.99990352819905, 11.7089089320616],
  [8.083246795921522, -7.981132988064893, -31.52159432874371, 16.31930543123136, -6.058818238834054],
] as const;

/** Continuous extension: start·(1−θ) + θ·(result + (1−θ)·(d₁ + θ·d₂)) with dₖ = Σ extension[k][j]·U[j]. */
export const extension = [
  [10.12623508344586, -7.487995877610167, -34.80091861555747, -7.992771707568823, 1.025137723295662],
  [-0.6762803392801253, 6.087714651680015, 16.43084320892478, 24.76722511418386, -6.594389125716872],
] as const;
