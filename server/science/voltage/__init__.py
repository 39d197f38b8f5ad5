"""What a cell voltage is made of, and how it answers to current, heat, bath and gap."""
