"""What surface sensors mean: block weight, tare, activity."""
