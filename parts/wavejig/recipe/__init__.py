"""What the user writes: the recipe's keys, its units, and errors that name file, line and key."""

from wavejig.recipe.errors import Problem, RecipeError
from wavejig.recipe.models import Recipe
from wavejig.recipe.reader import RecipeFile, read_recipe

__all__ = ["Problem", "Recipe", "RecipeError", "RecipeFile", "read_recipe"]
