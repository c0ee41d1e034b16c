//! Lines and columns.
