#pragma once
// Lines of a file, read in blocks of bounded size.
#include <cstdint>
#include <cstdio>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

namespace farsum::io::text {

/// A line longer than this is an error: no table has such lines.
inline constexpr std::size_t kLongestLine = 65536;

class LineReader {
 public:
  /// Throws file_not_readable.
  explicit LineReader(const std::string& path);
  /// The next line without its end (LF or CR LF), valid until the next call; false at the end of the file.
  /// Throws file_damaged for a line beyond kLongestLine, format_unsupported for a zero byte, file_not_readable.
  bool next(std::string_view& line);
  std::uint64_t line_number() const noexcept { return line_number_; }  ///< of the latest line, from 1
  std::uint64_t bytes_read() const noexcept { return bytes_; }
  std::uint64_t bytes_total() const noexcept { return total_; }

 private:
  void refill();

  std::string path_;
  std::unique_ptr<std::FILE, int (*)(std::FILE*)> file_;
  std::vector<char> buffer_;
  std::size_t begin_ = 0, end_ = 0;
  bool at_end_ = false;
  std::uint64_t line_number_ = 0, bytes_ = 0, total_ = 0;
};

/// Number of line ends in a file, plus one.
std::uint64_t count_lines(const std::string& path);

}  // namespace farsum::io::text
