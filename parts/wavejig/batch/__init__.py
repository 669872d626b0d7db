"""The whole batch: blanks nested on sheets, wire cut from stock, plates to print, the bill of materials."""
