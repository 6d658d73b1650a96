//! Dot products and multiples of vectors, in vector registers.
//! Convention: to be called inside a run-time dispatch, which compiles them for the unit `S`.

use pulp::Simd;

use super::scalar::Scalar;

/// `y += a x`.
#[inline(always)]
pub(super) fn add_multiple<T: Scalar, S: Simd>(simd: S, y: &mut [T], a: T, x: &[T]) {
    let (y_vectors, y_rest) = T::vectors_mut::<S>(y);
    let (x_vectors, x_rest) = T::vectors::<S>(x);
    let a_all = T::splat(simd, a);
    for (y, &x) in y_vectors.iter_mut().zip(x_vectors) {
        *y = T::times_plus(simd, a_all, x, *y);
    }
    for (y, &x) in y_rest.iter_mut().zip(x_rest) {
        *y += a * x;
    }
}

/// `sum a_i b_i`, in interleaved partial sums.
#[inline(always)]
pub(super) fn dot<T: Scalar, S: Simd>(simd: S, a: &[T], b: &[T]) -> T {
    let (a_vectors, a_rest) = T::vectors::<S>(a);
    let (b_vectors, b_rest) = T::vectors::<S>(b);
    let mut sums = [T::splat(simd, T::ZERO); 4];
    let (a_blocks, b_blocks) = (a_vectors.chunks_exact(4), b_vectors.chunks_exact(4));
    for (&a, &b) in a_blocks.remainder().iter().zip(b_blocks.remainder()) {
        sums[0] = T::times_plus(simd, a, b, sums[0]);
    }
    for (a, b) in a_blocks.zip(b_blocks) {
        for k in 0..4 {
            sums[k] = T::times_plus(simd, a[k], b[k], sums[k]);
        }
    }
    let total = T::plus(simd, T::plus(simd, sums[0], sums[1]), T::plus(simd, sums[2], sums[3]));
    let mut sum = T::sum_of_lanes(simd, total);
    for (&a, &b) in a_rest.iter().zip(b_rest) {
        sum += a * b;
    }
    sum
}
