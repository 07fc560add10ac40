"""Nasty files, each with the exact table or the exact message that it must give."""
