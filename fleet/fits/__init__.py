"""From life data to life distributions and posteriors."""
