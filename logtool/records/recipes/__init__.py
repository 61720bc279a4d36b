"""Recipes: how the lines of another program's text become records of the layout."""
