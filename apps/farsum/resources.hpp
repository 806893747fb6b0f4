#pragma once
// What this process may use: processors by affinity and container quota, memory by machine, container and address-space limit.
#include <cstdint>
#include <string>

namespace farsum::command {

/// Processors that this process may use: its affinity mask, cut to the container's quota rounded up; at least 1.
int usable_processors();

/// Bytes that this process could still take: the least of the machine's available memory, what each enclosing container leaves
/// and what the address-space limit leaves.
std::uint64_t free_memory();

/// Largest resident set of this process so far, in bytes.
std::uint64_t peak_resident_bytes();

/// Reads a size such as 4GiB, 500MB, 2.5G, 1048576. Suffixes B, K, M, G, T; KiB.. and bare K.. count 1024, KB.. count 1000.
/// Throws std::invalid_argument with the reason.
std::uint64_t parse_size(const std::string& text);

/// Processor name and count for the record, for example "Xeon ... (4 processors)".
std::string machine_name();

}  // namespace farsum::command
