"""What products are made of, and how stiff, dense and strong that is."""
