"""The Models page: what the library holds, one model in full, and what is decided about it."""
