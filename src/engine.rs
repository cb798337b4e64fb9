//! The saturation loop.
