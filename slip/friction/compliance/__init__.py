"""How bodies and their interface answer tractions with displacement: one protocol, several bodies."""
