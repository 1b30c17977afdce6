"""From a decision to the reset nets: stages, holds, overrides, modes, and who is guarded."""
