"""The solves that turn a chip into patterns: electric field, heat and electrothermal flow."""
