"""How the clamp presses on the face round a bolt."""
