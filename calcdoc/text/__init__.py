"""The design text: blocks, statements and formulas, read to trees and written back."""
