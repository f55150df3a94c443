//! Typed handles: a `u32` that says which table it counts in.

/// Declares handle types with `new` (crate-private) and `index`.
macro_rules! id {
    ($($(#[$doc:meta])* $name:ident)*) => { $(
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub struct $name(u32);

        impl $name {
            pub(crate) fn new(index: usize) -> Self {
                Self(u32::try_from(index).expect("validation caps counts below 2^32"))
            }

            /// Position in its table.
            #[must_use]
            pub fn index(self) -> usize {
                self.0 as usize
            }
        }
    )* };
}

pub(crate) use id;
