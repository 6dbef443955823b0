"""The one aeroelastic rotor: blade-element loads bound to rigid flap, solved for held speeds."""
