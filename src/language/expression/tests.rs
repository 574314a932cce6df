//! Tests of set expressions.
