"""Records and tables in, open formats out."""
