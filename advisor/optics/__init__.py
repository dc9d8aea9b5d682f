"""Pure functions on floats and numpy arrays: media, thin film, photometry, colour, lens form, ghosts, eye."""
