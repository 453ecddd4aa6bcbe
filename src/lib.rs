//! gatemix: which gates, how far open.
