//! One run of vertices for every seam, a function of the seam alone.
