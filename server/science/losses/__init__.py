"""Current that makes no metal: shorts, ferric reduction, hydrogen, leakage."""
