"""What a job is made of: frozen dataclasses in SI units that check themselves."""
