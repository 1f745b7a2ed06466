"""A straight beam over supports: statics, spread plasticity, collapse, hinges and their verdict."""
