"""From raw joint logs to hours, turns and impacts; bearing ratings."""
