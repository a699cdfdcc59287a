"""What the pages share: the record in hand, stored results, forms, pictures and words on the screen."""
