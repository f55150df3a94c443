//! Triangles for every piece, each proved within the chord tolerance.
