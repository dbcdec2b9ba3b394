"""Tests of the rates and ranges around an optimum."""
