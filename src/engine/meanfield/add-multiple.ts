/** The one vector operation the methods of integration share. */

/** sum ← sum + factor · vector, entry by entry. */
export function addMultiple(sum: Float64Array, factor: number, vector: Float64Array): void {
  for (let i = 0; i < sum.length; i++) sum[i]! += factor * vector[i]!;
}
