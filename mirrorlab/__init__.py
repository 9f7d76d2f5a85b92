"""Mirrorlab: mirrors, the group their reflections generate, and what each trade makes of it."""
