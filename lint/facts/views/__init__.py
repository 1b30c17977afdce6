"""A view for each class of the model, made from it."""
