"""Published methods as pure functions of arrays, one subject a file; no model objects, no I/O."""
