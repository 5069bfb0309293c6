"""Direct stiffness of pin-jointed trusses: geometry, assembly, solution, mechanisms."""
