#pragma once
// Groups as symbol tables: a B-tree of version 1 over symbol nodes, and a local heap with the names (sections III.A.1, III.B to
// III.D of the HDF5 File Format Specification, version 3.0).
#include <cstdint>
#include <vector>

#include "io/hdf5/file_bytes.hpp"
#include "io/hdf5/message_check.hpp"

namespace farsum::io::hdf5 {

struct SymbolTable {
  std::uint64_t tree, heap;    ///< addresses
  std::uint64_t most_symbols;  ///< a symbol node can have, from the superblock
};

/// Addresses of the object headers of the members. Throws file_damaged when nodes do not fit into the file, levels of the tree
/// do not descend, names lie outside the heap, or the heap's list of free blocks leaves the heap or is a circle.
std::vector<std::uint64_t> check_symbol_table(FileBytes& file, FieldSizes sizes, const SymbolTable& table);

}  // namespace farsum::io::hdf5
