"""Plates, stacks, order rules, room on the sleeve: what one end of a bar can carry, exactly."""
