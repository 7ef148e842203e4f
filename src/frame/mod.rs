//! How do directions turn into angles, and one frame into another?
