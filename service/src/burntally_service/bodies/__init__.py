"""The system of bodies: catalogue or user-made, ephemerides, frames."""
