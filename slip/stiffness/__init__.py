"""The contact stiffness that a finite-element model should have: its value in every form, its window, the error of the present one."""
