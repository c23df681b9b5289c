//! Tables as text.
