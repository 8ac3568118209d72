//! Results for people.

mod columns;
pub mod text;
