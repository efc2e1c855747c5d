"""Multicomponent mass-transfer rates for distillation and absorption stages."""
