"""What the two arms do to the light's phase: air, glass, and the arms that are made of them."""

__all__: list[str] = []
