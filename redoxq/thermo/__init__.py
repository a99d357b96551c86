"""Physics of solutions: water, Gibbs energies, activities, equilibrium."""
