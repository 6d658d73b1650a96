//! Memory of a factor's values.
//!
//! Large factors lie in memory of their own, in large pages where the system has them on request (Linux): touching
//! small pages for the first time costs about half as much as the first factorisation itself.

use std::marker::PhantomData;

use memmap2::MmapMut;

use super::scalar::Scalar;

/// Bytes from which values get memory of their own: two large pages.
const LARGE: usize = 4 << 20;

/// A fixed number of values, zero at first.
pub(super) struct Storage<T> {
    place: Place<T>,
}

enum Place<T> {
    Heap(Vec<T>),
    Own(MmapMut, PhantomData<T>),
}

impl<T: Scalar> Storage<T> {
    /// `length` zeros.
    pub(super) fn zeros(length: usize) -> Self {
        let bytes = length * size_of::<T>();
        let own = if bytes < LARGE { None } else { MmapMut::map_anon(bytes).ok() };
        let place = match own {
            Some(map) => {
                ask_for_large_pages(&map);
                Place::Own(map, PhantomData)
            }
            None => Place::Heap(vec![T::ZERO; length]),
        };
        Self { place }
    }

    /// The values.
    pub(super) fn values(&self) -> &[T] {
        match &self.place {
            Place::Heap(values) => values,
            Place::Own(map, _) => bytemuck::cast_slice(map),
        }
    }

    /// The values, to write to.
    pub(super) fn values_mut(&mut self) -> &mut [T] {
        match &mut self.place {
            Place::Heap(values) => values,
            Place::Own(map, _) => bytemuck::cast_slice_mut(map),
        }
    }
}

/// Large pages are a matter of speed alone: a system without them gives small ones.
#[cfg(target_os = "linux")]
fn ask_for_large_pages(map: &MmapMut) {
    let _ = map.advise(memmap2::Advice::HugePage);
}

#[cfg(not(target_os = "linux"))]
fn ask_for_large_pages(_: &MmapMut) {}

#[cfg(test)]
mod tests {
    use num_complex::Complex64;

    use super::*;

    #[test]
    fn values_are_zero_at_first_and_keep_what_is_written_small_or_large() {
        for length in [0, 1, 1000, LARGE / 16 - 1, LARGE / 16, LARGE / 16 + 3] {
            let mut storage = Storage::<Complex64>::zeros(length);
            assert_eq!(storage.values().len(), length);
            assert!(storage.values().iter().all(|v| *v == Complex64::ZERO));
            for (k, v) in storage.values_mut().iter_mut().enumerate() {
                *v = Complex64::new(k as f64, -1.0);
            }
            assert!(storage.values().iter().enumerate().all(|(k, v)| *v == Complex64::new(k as f64, -1.0)));
        }
    }
}
