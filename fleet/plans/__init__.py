"""From forecasts, costs and stock to what to replace, hold and print."""
