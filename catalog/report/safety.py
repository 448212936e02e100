"""What stands under every answer that someone might build by."""

SAFETY = (
    "A screening aid: verify against the maker's current datasheet, and follow local codes and "
    "licensed practice."
)
