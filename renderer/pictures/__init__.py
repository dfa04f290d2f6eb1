"""Pictures: exact sums of rounds, layers, OpenEXR and PNG, and reading of pictures that others made."""
