//! How does a scene become canvas calls or SVG?
