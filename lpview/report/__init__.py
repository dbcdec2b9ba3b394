"""Examinations as text, Markdown and JSON; one number formatter for all of them."""
