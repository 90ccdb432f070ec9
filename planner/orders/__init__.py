"""Orders as the pages handle them: the grid, and lists that wait to be checked."""
