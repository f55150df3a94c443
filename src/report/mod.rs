//! What is told to people and programs: summaries and seam lists.
