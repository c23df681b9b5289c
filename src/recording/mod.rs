//! Recordings: text in, text out.
