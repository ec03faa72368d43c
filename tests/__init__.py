"""Mirrors the rooms of the house; outside truth lies in references/."""
