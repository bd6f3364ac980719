"""Thin Streamlit pages over fleet."""
