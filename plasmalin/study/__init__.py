"""What the numbers of one model say beyond its roots."""
