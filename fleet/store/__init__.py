"""The only SQL: models, migrations, opening, writing, reading and importing a book."""
