/** Least squares in a stated order: small systems, the same bits everywhere. */

/** The lower triangular factor of a symmetric positive matrix. @param {number[][]} gram @returns {number[][]} */
export function cholesky(gram) {
  const factor = gram.map(() => new Array(gram.length).fill(0));
  gram.forEach((row, i) => {
    for (let j = 0; j <= i; j++) {
      let rest = row[j];
      for (let k = 0; k < j; k++) rest -= factor[i][k] * factor[j][k];
      factor[i][j] = i === j ? Math.sqrt(rest) : rest / factor[j][j];
    }
  });
  return factor;
}

/** The solution of factor * factor^T * x = right, in place of `right`. @template {number[] | Float64Array} T @param {number[][]} factor @param {T} right @returns {T} */
export function solved(factor, right) {
  const count = right.length;
  for (let i = 0; i < count; i++) {
    for (let k = 0; k < i; k++) right[i] -= factor[i][k] * right[k];
    right[i] /= factor[i][i];
  }
  for (let i = count - 1; i >= 0; i--) {
    for (let k = i + 1; k < count; k++) right[i] -= factor[k][i] * right[k];
    right[i] /= factor[i][i];
  }
  return right;
}
