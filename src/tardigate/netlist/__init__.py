"""Netlist: trees and parts to the flat design in columns."""
