"""Smearing: members and loads per metre run or per radian, and the way back. Formulas only."""
