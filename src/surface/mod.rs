//! The kinds of surface a user writes, each turned exactly into rational
//! Bezier pieces.
