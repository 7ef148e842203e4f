//! How do the published notations of elements read?
