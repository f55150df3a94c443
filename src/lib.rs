//! Certified, watertight meshes and seam reports from parametric patch sets.
//!
//! Data goes one way: a RON file becomes a [`patch_set::PatchSet`] (every kind
//! of surface as exact rational Bezier pieces), the pieces' edges are paired
//! into a [`topology::Topology`], every seam gets one run of vertices
//! ([`sampling`]), every piece is filled with triangles that are proved to be
//! within the chord tolerance ([`tessellation`]), and the [`mesh::Mesh`] is
//! written by [`format`](mod@format) or described by [`report`].
//!
//! A room imports only from the rooms listed before it here.

#![cfg_attr(
    test,
    allow(clippy::unwrap_used, reason = "a panic is how a test fails")
)]

pub mod pace;

pub mod scalar;

pub mod bezier;

pub mod surface;

pub mod patch_set;

pub mod topology;

pub mod continuity;

pub mod revision;

pub mod mending;

pub mod sampling;

pub mod tessellation;

pub mod mesh;

pub mod sizing;

pub mod quality;

pub mod format;

pub mod report;

pub mod picture;

pub mod page;

pub mod demo;

pub mod cli;
