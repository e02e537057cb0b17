"""What a tensor means: directional constants, extremes, averages, waves and modes."""
