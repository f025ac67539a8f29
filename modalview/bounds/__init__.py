"""What is known of the natural frequencies before any solve."""
