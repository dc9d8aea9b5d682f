"""Pages and paper: text in, a call to the domain, text out."""
