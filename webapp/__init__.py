"""The dashboard: parses what people enter, calls the model, draws the result."""
