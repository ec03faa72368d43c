"""Does social position go with brain organisation?"""
