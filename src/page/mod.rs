//! The page that goes with a mesh to the reviewer: one HTML file with summary,
//! pictures, seams, histograms, a viewer, and where it all comes from. It loads
//! nothing and says so to the browser (content security policy).

mod gallery;
mod histogram;
mod markup;
mod quality;
mod sheet;
mod tables;
mod viewer;

pub use gallery::Gallery;
pub use sheet::{Provenance, Sheet};
