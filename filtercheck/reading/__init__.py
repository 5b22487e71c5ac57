"""Files -> model: YAML with positions, schema errors, preferred values."""
