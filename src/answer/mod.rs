//! What an answer is made of: numbers as text, tables, figures, write-ups. It knows no statistics.
