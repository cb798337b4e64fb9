//! One open theory with all that is known about it.

mod derivation;
mod evidence;
