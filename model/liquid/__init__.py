"""The liquid: water, what is dissolved in it, and how warmth changes it."""
