#pragma once
// A look at the structure of an HDF5 file before the HDF5 library sees it. The library trusts sizes inside object headers and
// reads past its buffers when they are damaged; here every one of them is held against the block it lies in.
//
// Read are the superblock (versions 0 to 3, behind a user block of 512, 1024, ... bytes), all object headers (versions 1 and 2)
// with their continuation blocks and messages, and, to reach all objects, links in headers and symbol tables (B-tree of version
// 1, symbol nodes, local heap). The layouts are those of the HDF5 File Format Specification, version 3.0.
// Not read: fractal heaps (groups and attributes in dense storage), shared messages, raw data and its indexes, files whose
// metadata is in a cache image, and files that external links lead to. Such parts pass: a sound file is never refused.
#include <string>

namespace farsum::io::hdf5 {

/// Throws file_damaged, naming the byte and what is wrong there, when structures do not fit into each other or into the file.
/// A file that cannot be read or has no HDF5 signature passes. Reads metadata only, each piece once; the work is bounded by a
/// small multiple of the file's size even where damage makes structures overlap or form circles.
void check_structure(const std::string& path);

}  // namespace farsum::io::hdf5
