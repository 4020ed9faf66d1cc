"""Pure figure builders: a result in, a plain figure dict out."""
