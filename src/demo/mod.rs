//! The sets we ship, made by code.
