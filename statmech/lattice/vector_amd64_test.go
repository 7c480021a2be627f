package lattice

func useVector(use bool) { vector = use }
