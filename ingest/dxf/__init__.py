"""DXF: the only reader that imports ezdxf."""
