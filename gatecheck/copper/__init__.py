"""Where the copper of a net runs: distances along it, and the loop a gate current encloses. Boards only."""
