package lanes

func useVector(use bool) { vector = use }
