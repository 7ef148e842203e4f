//! What is drawn, fully resolved?
