"""Benchmarks: print figures as ratios of one run; they assert nothing."""
