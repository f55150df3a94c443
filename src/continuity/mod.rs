//! Continuity across seams: gap (G0), tangent angle (G1), and the verdict.
