//! Checks of the units stage.
