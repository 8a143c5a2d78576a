"""What results depend on, what a revision changed, and which posted results still hold."""
