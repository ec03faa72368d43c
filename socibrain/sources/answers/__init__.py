"""Questionnaire answers, one file per layout."""
