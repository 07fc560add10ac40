"""Shapes that ln k can have: temperature laws, salt laws, and the surface they make together."""
