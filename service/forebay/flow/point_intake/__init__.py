"""Flow near compact openings between the bed and the surface, where the depth mean says too little."""
