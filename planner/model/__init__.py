"""What is tested, what it is judged by, and what comes out: frozen dataclasses in SI, no I/O."""
