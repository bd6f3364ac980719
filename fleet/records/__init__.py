"""What a person or file states: frozen, self-checking records, the History and the trade vocabulary."""
