"""From posteriors, present ages and planned use to odds and demand."""
