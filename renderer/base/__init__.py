"""What every other room stands on: errors, constants with their source, the `kernel` decorator, vector operations."""
